#include "render/pen.h"

#include <stdlib.h>
#include <string.h>

#include <cairo-pdf.h>
#include <cairo-svg.h>
#include <fontconfig/fontconfig.h>
#include <pango/pangocairo.h>

static const char *const family = "DejaVu Sans";
static const double png_scale = 2; /* 144 dots per inch */

struct bh_pen {
	bh_page_kind kind;
	bool measuring;
	cairo_surface_t *surface;
	cairo_t *cairo;
	PangoLayout *layout;
	bh_text bytes;
	size_t page;
};

static cairo_status_t collect(void *to, const unsigned char *bytes, unsigned count)
{
	bh_text *text = to;

	bh_text_add_bytes(text, bytes, count);
	return text->lost ? CAIRO_STATUS_NO_MEMORY : CAIRO_STATUS_SUCCESS;
}

/* Without any font pango draws into a null pointer: look first. */
static bool have_font(void)
{
	PangoFontMap *map = pango_cairo_font_map_get_default();
	PangoFontFamily **families = NULL;
	int count = 0;
	bool found = false;

	pango_font_map_list_families(map, &families, &count);
	for (int i = 0; i < count && !found; i++)
		found = strcmp(pango_font_family_get_name(families[i]), family) == 0;
	g_free(families);
	return found;
}

static cairo_surface_t *surface_of(bh_pen *pen, size_t pages, const char *title)
{
	double height = BH_PAGE_HEIGHT * (double)pages;
	cairo_surface_t *surface;

	if (pen->measuring)
		return cairo_recording_surface_create(CAIRO_CONTENT_COLOR, NULL);
	switch (pen->kind) {
	case BH_PAGE_SVG:
		surface = cairo_svg_surface_create_for_stream(collect, &pen->bytes,
							      BH_PAGE_WIDTH, height);
		cairo_svg_surface_set_document_unit(surface, CAIRO_SVG_UNIT_PT);
		return surface;
	case BH_PAGE_PNG:
		return cairo_image_surface_create(CAIRO_FORMAT_RGB24,
						  (int)(BH_PAGE_WIDTH * png_scale),
						  (int)(height * png_scale));
	default:
		surface = cairo_pdf_surface_create_for_stream(
			collect, &pen->bytes, BH_PAGE_WIDTH, BH_PAGE_HEIGHT);
		cairo_pdf_surface_set_metadata(surface, CAIRO_PDF_METADATA_TITLE, title);
		cairo_pdf_surface_set_metadata(surface, CAIRO_PDF_METADATA_CREATOR,
					       "beamhour " BH_VERSION);
		/* a fixed date: the same plan gives the same bytes */
		cairo_pdf_surface_set_metadata(surface, CAIRO_PDF_METADATA_CREATE_DATE,
					       "2000-01-01T00:00:00Z");
		return surface;
	}
}

bh_pen *bh_pen_open(bh_page_kind kind, bool measuring, size_t pages, const char *title,
		    bh_err *err)
{
	PangoFontDescription *font;
	bh_pen *pen;

	if (!have_font()) {
		bh_fail(err, BH_BAD_SYSTEM,
			"the font DejaVu Sans is missing\non Debian: apt-get install "
			"fonts-dejavu-core");
		return NULL;
	}
	pen = calloc(1, sizeof *pen);
	if (!pen) {
		bh_fail_memory(err);
		return NULL;
	}
	pen->kind = kind;
	pen->measuring = measuring;
	pen->surface = surface_of(pen, pages, title);
	pen->cairo = cairo_create(pen->surface);
	if (!measuring && kind != BH_PAGE_PDF) {
		if (kind == BH_PAGE_PNG)
			cairo_scale(pen->cairo, png_scale, png_scale);
		cairo_set_source_rgb(pen->cairo, 1, 1, 1);
		cairo_paint(pen->cairo);
	}
	pen->layout = pango_cairo_create_layout(pen->cairo);
	font = pango_font_description_from_string(family);
	pango_layout_set_font_description(pen->layout, font);
	pango_font_description_free(font);
	return pen;
}

static void prepare(bh_pen *pen, bh_words words, double width)
{
	static const PangoAlignment alignments[] = { PANGO_ALIGN_LEFT, PANGO_ALIGN_CENTER,
						     PANGO_ALIGN_RIGHT };
	PangoFontDescription *font = pango_font_description_new();

	pango_font_description_set_family(font, family);
	pango_font_description_set_absolute_size(font, words.size * PANGO_SCALE);
	pango_font_description_set_weight(font, words.bold ? PANGO_WEIGHT_BOLD
							   : PANGO_WEIGHT_NORMAL);
	pango_layout_set_font_description(pen->layout, font);
	pango_font_description_free(font);
	pango_layout_set_wrap(pen->layout, PANGO_WRAP_WORD_CHAR);
	pango_layout_set_width(pen->layout, width > 0 ? (int)(width * PANGO_SCALE) : -1);
	pango_layout_set_alignment(pen->layout, alignments[words.at]);
	pango_layout_set_text(pen->layout, words.text, -1);
}

static double height_of(const bh_pen *pen)
{
	int width, height;

	pango_layout_get_size(pen->layout, &width, &height);
	return (double)height / PANGO_SCALE;
}

double bh_pen_words(bh_pen *pen, bh_words words, double x, double y, double width)
{
	prepare(pen, words, width);
	cairo_set_source_rgb(pen->cairo, words.grey, words.grey, words.grey);
	cairo_move_to(pen->cairo, x, y);
	pango_cairo_update_layout(pen->cairo, pen->layout);
	pango_cairo_show_layout(pen->cairo, pen->layout);
	return height_of(pen);
}

double bh_pen_words_height(bh_pen *pen, bh_words words, double width)
{
	prepare(pen, words, width);
	return height_of(pen);
}

double bh_pen_words_width(bh_pen *pen, bh_words words)
{
	int width, height;

	prepare(pen, words, 0);
	pango_layout_get_size(pen->layout, &width, &height);
	return (double)width / PANGO_SCALE;
}

static void stroke_path(bh_pen *pen, bh_stroke stroke)
{
	static const double dashes[] = { 2.5, 2 };

	cairo_set_source_rgb(pen->cairo, stroke.grey, stroke.grey, stroke.grey);
	cairo_set_line_width(pen->cairo, stroke.width);
	cairo_set_line_join(pen->cairo, CAIRO_LINE_JOIN_ROUND);
	cairo_set_dash(pen->cairo, dashes, stroke.dashed ? 2 : 0, 0);
	cairo_stroke(pen->cairo);
}

void bh_pen_line(bh_pen *pen, bh_segment segment, bh_stroke stroke)
{
	cairo_move_to(pen->cairo, segment.x1, segment.y1);
	cairo_line_to(pen->cairo, segment.x2, segment.y2);
	stroke_path(pen, stroke);
}

void bh_pen_fill(bh_pen *pen, bh_box box, double grey)
{
	cairo_set_source_rgb(pen->cairo, grey, grey, grey);
	cairo_rectangle(pen->cairo, box.x, box.y, box.width, box.height);
	cairo_fill(pen->cairo);
}

void bh_pen_frame(bh_pen *pen, bh_box box, bh_stroke stroke)
{
	cairo_rectangle(pen->cairo, box.x, box.y, box.width, box.height);
	stroke_path(pen, stroke);
}

static void trace(bh_pen *pen, const double *x, const double *y, size_t count)
{
	for (size_t i = 0; i < count; i++)
		cairo_line_to(pen->cairo, x[i], y[i]);
}

void bh_pen_curve(bh_pen *pen, const double *x, const double *y, size_t count,
		  bh_stroke stroke)
{
	if (count == 0)
		return;
	cairo_new_path(pen->cairo);
	trace(pen, x, y, count);
	stroke_path(pen, stroke);
}

void bh_pen_marker(bh_pen *pen, double x, double y, double size)
{
	cairo_move_to(pen->cairo, x, y);
	cairo_rel_line_to(pen->cairo, -size / 2, -size);
	cairo_rel_line_to(pen->cairo, size, 0);
	cairo_close_path(pen->cairo);
	cairo_set_source_rgb(pen->cairo, 0, 0, 0);
	cairo_fill(pen->cairo);
}

void bh_pen_next_page(bh_pen *pen)
{
	pen->page++;
	if (pen->measuring)
		return;
	if (pen->kind == BH_PAGE_PDF)
		cairo_show_page(pen->cairo);
	else /* pictures hold all pages, one below the other */
		cairo_translate(pen->cairo, 0, BH_PAGE_HEIGHT);
}

static bool finish(bh_pen *pen)
{
	cairo_status_t status;

	if (pen->kind == BH_PAGE_PDF && !pen->measuring)
		cairo_show_page(pen->cairo);
	status = cairo_status(pen->cairo);
	if (!pen->measuring && pen->kind == BH_PAGE_PNG && status == CAIRO_STATUS_SUCCESS)
		status = cairo_surface_write_to_png_stream(pen->surface, collect,
							   &pen->bytes);
	g_object_unref(pen->layout);
	cairo_destroy(pen->cairo);
	cairo_surface_finish(pen->surface);
	if (status == CAIRO_STATUS_SUCCESS)
		status = cairo_surface_status(pen->surface);
	cairo_surface_destroy(pen->surface);
	return status == CAIRO_STATUS_SUCCESS && !pen->bytes.lost;
}

bool bh_pen_close(bh_pen *pen, bh_text *bytes, bh_err *err)
{
	bool good = finish(pen);

	if (good && bytes)
		bh_text_add_bytes(bytes, pen->bytes.bytes, pen->bytes.length);
	bh_text_free(&pen->bytes);
	free(pen);
	return good || bh_fail(err, BH_BAD_SYSTEM, "the page cannot be drawn (memory)");
}

void bh_page_release(void)
{
	pango_cairo_font_map_set_default(NULL);
	cairo_debug_reset_static_data();
	FcFini();
}
