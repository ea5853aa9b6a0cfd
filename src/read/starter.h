#ifndef READ_STARTER_H
#define READ_STARTER_H

/* The commented request that a user starts from; it reads clean with a shipped preset. */
const char *bh_starter(void);

#endif
