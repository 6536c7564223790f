/* Meshes: layers, tiles, sections, arrays. Part of tepor.h. */
#ifndef TEPOR_C_TEPOR_MESH_H
#define TEPOR_C_TEPOR_MESH_H

#include <tepor/c/tepor_values.h>

#ifdef __cplusplus
extern "C" {
#endif

typedef enum tepor_frame_kind { TEPOR_PLANAR = 0, TEPOR_CYLINDRICAL = 1, TEPOR_SPHERICAL = 2 } tepor_frame_kind;

/* What all watts are for. `size`: area [m2] of a 1D planar wall, depth [m] of a 2D section, length [m] of a 1D cylinder;
 * it does not count for 2D bodies of revolution (x = radius, y = axial) and spheres. */
typedef struct tepor_frame {
    int32_t kind; /* tepor_frame_kind */
    int32_t reserved;
    double size;
} tepor_frame;
TEPOR_C_API tepor_frame tepor_planar(double size);
TEPOR_C_API tepor_frame tepor_cylindrical(double length);
TEPOR_C_API tepor_frame tepor_spherical(void);

typedef enum tepor_element {
    TEPOR_SEGMENT_1 = 11,
    TEPOR_SEGMENT_2 = 12,
    TEPOR_SEGMENT_3 = 13,
    TEPOR_EXACT_SEGMENT = 19, /* steady node temperatures exact for any conductivity and source of place */
    TEPOR_TRIANGLE_1 = 21,
    TEPOR_TRIANGLE_2 = 22,
    TEPOR_TRIANGLE_3 = 23,
    TEPOR_QUADRILATERAL_1 = 31,
    TEPOR_QUADRILATERAL_2 = 32,
    TEPOR_QUADRILATERAL_3 = 33
} tepor_element;

/* One layer of a 1D stack. */
typedef struct tepor_layer {
    const char* region;
    tepor_value thickness; /* [m], a number or a parameter */
    int64_t cells;         /* at least 1 */
    double grading;        /* last cell over first; 1 or 0: equal cells; below 0: middle over first, mirrored */
} tepor_layer;

/* Layers one after the other from `start` [m] (0, or an inner radius; a number or a parameter), faces "inner" and "outer".
 * TEPOR_BAD_VALUE, TEPOR_BAD_NAME, TEPOR_MISSING, TEPOR_TOO_LARGE. */
TEPOR_C_API tepor_status tepor_layers_create(tepor_session* session, tepor_element element, const tepor_layer* layers,
                                             size_t count, tepor_frame frame, tepor_value start, tepor_mesh** out);

/* Rectangles on grid lines: paint, cut, name pieces of the edge, then mesh. Coordinates in metres, two opposite corners. */
TEPOR_C_API tepor_status tepor_tiles_create(tepor_session* session, tepor_tiles** out);
TEPOR_C_API void tepor_tiles_free(tepor_tiles* tiles);
TEPOR_C_API tepor_status tepor_tiles_add(tepor_session* session, tepor_tiles* tiles, const char* region, double x0,
                                         double y0, double x1, double y1);
/* `face` may be "" : the new edges are then adiabatic. */
TEPOR_C_API tepor_status tepor_tiles_cut(tepor_session* session, tepor_tiles* tiles, double x0, double y0, double x1,
                                         double y1, const char* face);
TEPOR_C_API tepor_status tepor_tiles_face(tepor_session* session, tepor_tiles* tiles, const char* face, double x0,
                                          double y0, double x1, double y1);
/* So many cells between two lines x = from and x = to [m] (y likewise), the last `grading` times as long as the first. */
TEPOR_C_API tepor_status tepor_tiles_split_x(tepor_session* session, tepor_tiles* tiles, double from, double to,
                                             int64_t cells, double grading);
TEPOR_C_API tepor_status tepor_tiles_split_y(tepor_session* session, tepor_tiles* tiles, double from, double to,
                                             int64_t cells, double grading);
/* Cells of at most `size` [m] on both sides of the line x = at (y = at), growing away from it. */
TEPOR_C_API tepor_status tepor_tiles_finer_x(tepor_session* session, tepor_tiles* tiles, double at, double size);
TEPOR_C_API tepor_status tepor_tiles_finer_y(tepor_session* session, tepor_tiles* tiles, double at, double size);
/* One more grid line x = at (y = at) [m]. */
TEPOR_C_API tepor_status tepor_tiles_line_x(tepor_session* session, tepor_tiles* tiles, double at);
TEPOR_C_API tepor_status tepor_tiles_line_y(tepor_session* session, tepor_tiles* tiles, double at);
/* Cells no longer than `size` [m]; triangles or quadrilaterals. Faces "left", "right", "bottom", "top" on the outer box. */
TEPOR_C_API tepor_status tepor_tiles_mesh(tepor_session* session, const tepor_tiles* tiles, tepor_element element,
                                          double size, tepor_frame frame, tepor_mesh** out);

/* A drawing of shapes, painted one over the other; cuts apply after all painting. Metres. */
TEPOR_C_API tepor_status tepor_section_create(tepor_session* session, tepor_section** out);
TEPOR_C_API void tepor_section_free(tepor_section* section);
TEPOR_C_API tepor_status tepor_section_add_rectangle(tepor_session* session, tepor_section* section, const char* region,
                                                     double x0, double y0, double x1, double y1);
TEPOR_C_API tepor_status tepor_section_add_circle(tepor_session* session, tepor_section* section, const char* region,
                                                  double x, double y, double radius);
/* `corners`: x and y of each of the `count` corners in turn. */
TEPOR_C_API tepor_status tepor_section_add_polygon(tepor_session* session, tepor_section* section, const char* region,
                                                   const double* corners, size_t count);
TEPOR_C_API tepor_status tepor_section_add_ring(tepor_session* session, tepor_section* section, const char* region,
                                                double x, double y, double inner, double outer);
TEPOR_C_API tepor_status tepor_section_add_rounded_rectangle(tepor_session* session, tepor_section* section,
                                                             const char* region, double x0, double y0, double x1,
                                                             double y1, double radius);
/* One piece of an outline: straight on to (x, y), or with `arc` not 0 along the arc through (through_x, through_y). */
typedef struct tepor_stroke {
    double x; /* [m] */
    double y;
    double through_x;
    double through_y;
    int32_t arc;
    int32_t reserved;
} tepor_stroke;
/* What an outline of `count` pieces from (x, y) encloses; it closes straight where it does not end at its start. */
TEPOR_C_API tepor_status tepor_section_add_outline(tepor_session* session, tepor_section* section, const char* region,
                                                   double x, double y, const tepor_stroke* strokes, size_t count);
TEPOR_C_API tepor_status tepor_section_cut_outline(tepor_session* session, tepor_section* section, const char* face,
                                                   double x, double y, const tepor_stroke* strokes, size_t count);
/* A hole; its edge becomes part of `face`, or is adiabatic with "". */
TEPOR_C_API tepor_status tepor_section_cut_rectangle(tepor_session* session, tepor_section* section, const char* face,
                                                     double x0, double y0, double x1, double y1);
TEPOR_C_API tepor_status tepor_section_cut_circle(tepor_session* session, tepor_section* section, const char* face,
                                                  double x, double y, double radius);
TEPOR_C_API tepor_status tepor_section_cut_polygon(tepor_session* session, tepor_section* section, const char* face,
                                                   const double* corners, size_t count);
/* Names the outer edge between two points of it, along the shorter way. */
TEPOR_C_API tepor_status tepor_section_face(tepor_session* session, tepor_section* section, const char* face, double x0,
                                            double y0, double x1, double y1);
/* The same on the way that passes a third point, for loops where the longer way is meant. */
TEPOR_C_API tepor_status tepor_section_face_through(tepor_session* session, tepor_section* section, const char* face,
                                                    double x0, double y0, double through_x, double through_y, double x1,
                                                    double y1);
/* Names what of the edge of the shape added or cut last is outer edge. */
TEPOR_C_API tepor_status tepor_section_face_of_last(tepor_session* session, tepor_section* section, const char* face);
/* Names the outer cell sides whose ends and middle pass a test of place [m]: not 0 is yes. */
typedef int32_t (*tepor_place_test)(double x, double y, void* user_data);
TEPOR_C_API tepor_status tepor_section_face_where(tepor_session* session, tepor_section* section, const char* face,
                                                  tepor_place_test test, void* user_data);
/* Names all outer edge that has no name. */
TEPOR_C_API tepor_status tepor_section_rest(tepor_session* session, tepor_section* section, const char* face);
/* A line inside that cell sides follow, straight or of `count` pieces from (x, y); a point where a node must be. */
TEPOR_C_API tepor_status tepor_section_line(tepor_session* session, tepor_section* section, double x0, double y0,
                                            double x1, double y1);
TEPOR_C_API tepor_status tepor_section_line_outline(tepor_session* session, tepor_section* section, double x, double y,
                                                    const tepor_stroke* strokes, size_t count);
TEPOR_C_API tepor_status tepor_section_hold(tepor_session* session, tepor_section* section, double x, double y);
/* Points closer than this [m] are one, instead of 1e-9 of the diagonal. */
TEPOR_C_API tepor_status tepor_section_tolerance(tepor_session* session, tepor_section* section, double distance);
/* Another cell size [m] in a region or along a face of the drawing; the smallest that applies counts. */
TEPOR_C_API tepor_status tepor_section_size_in(tepor_session* session, tepor_section* section, const char* region,
                                               double size);
TEPOR_C_API tepor_status tepor_section_size_on(tepor_session* session, tepor_section* section, const char* face,
                                               double size);
/* Triangles of about `size` [m]. TEPOR_BAD_GEOMETRY names place and cause. */
TEPOR_C_API tepor_status tepor_section_mesh(tepor_session* session, const tepor_section* section, tepor_element element,
                                            double size, tepor_frame frame, tepor_mesh** out);

/* How finely to mesh a drawing; start from tepor_meshing_default(). */
typedef struct tepor_meshing {
    size_t size;
    double cell_size; /* longest cell [m]; 0: every space of tiles has a split, a 40th of a section's diagonal */
    double growth;    /* tiles: from cell to cell away from a finer line; sections: of sizes per unit of distance */
    double turn;      /* sections: most an arc turns within one cell side [degrees], at most 30 */
    double deviation; /* sections: most a chord lies off its arc [m]; 0: only `turn` counts */
    int64_t most_triangles; /* sections: more is TEPOR_TOO_LARGE, for sizes in the wrong unit */
    int32_t diagonals;      /* tiles of triangles: tepor_diagonals */
    int32_t reserved;
} tepor_meshing;
typedef enum tepor_diagonals {
    TEPOR_DIAGONALS_ALTERNATING = 0, /* a chequered pattern, which favours no direction */
    TEPOR_DIAGONALS_CROSSED = 1,     /* four triangles around a node in the middle */
    TEPOR_DIAGONALS_RISING = 2,      /* from lower left to upper right */
    TEPOR_DIAGONALS_FALLING = 3
} tepor_diagonals;
/* `growth` is that of tiles for rectangles, that of sections for sections: 0 takes the usual one of either. */
TEPOR_C_API tepor_meshing tepor_meshing_default(void);
TEPOR_C_API tepor_status tepor_tiles_mesh_with(tepor_session* session, const tepor_tiles* tiles, tepor_element element,
                                               const tepor_meshing* meshing, tepor_frame frame, tepor_mesh** out);
TEPOR_C_API tepor_status tepor_section_mesh_with(tepor_session* session, const tepor_section* section,
                                                 tepor_element element, const tepor_meshing* meshing, tepor_frame frame,
                                                 tepor_mesh** out);
/* Cell sizes of a section by place: the callback gives a size [m] > 0 at (x, y) [m]; the smallest that applies counts. */
typedef double (*tepor_size_law)(double x, double y, void* user_data);
TEPOR_C_API tepor_status tepor_section_size_by(tepor_session* session, tepor_section* section, tepor_size_law law,
                                               void* user_data);

/* A mesh of one's own as arrays. Start from all zeros, set `size`. Without regions everything is the region "body". */
typedef struct tepor_arrays {
    size_t size;          /* sizeof(tepor_arrays) */
    const double* places; /* x and y of every node in turn [m]; y unused in 1D */
    size_t node_count;
    const int32_t* cells; /* node numbers from 0, nodes of the element's order after one another */
    size_t cell_count;
    const int32_t* region_of_cell; /* position in region_names for every cell, or NULL */
    const char* const* region_names;
    size_t region_count;
    const char* const* face_names;
    const int32_t* face_of_side; /* position in face_names, for every listed cell side */
    const int32_t* sides;        /* cell and local side of every listed side in turn */
    size_t face_count;
    size_t side_count;
} tepor_arrays;
/* Nodes of a cell: corners counter-clockwise, then inner nodes of the sides in the same sense, then those inside; side i
 * runs from corner i to the next. In 1D both ends first, side 0 at the left. TEPOR_BAD_MESH names cell, node and what to
 * do; TEPOR_TOO_LARGE. */
TEPOR_C_API tepor_status tepor_mesh_from_arrays(tepor_session* session, tepor_element element,
                                                const tepor_arrays* arrays, tepor_frame frame, tepor_mesh** out);
/* Every cell split into halves or quarters; names and curves are kept. */
TEPOR_C_API tepor_status tepor_mesh_refined(tepor_session* session, const tepor_mesh* mesh, tepor_mesh** out);

TEPOR_C_API void tepor_mesh_free(tepor_mesh* mesh);
/* 0 for NULL. */
TEPOR_C_API size_t tepor_mesh_node_count(const tepor_mesh* mesh);
TEPOR_C_API size_t tepor_mesh_cell_count(const tepor_mesh* mesh);
TEPOR_C_API size_t tepor_mesh_nodes_per_cell(const tepor_mesh* mesh);
/* x and y of every node in turn [m] into `places`, 2 * node_count entries. */
TEPOR_C_API tepor_status tepor_mesh_places(tepor_session* session, const tepor_mesh* mesh, double* places,
                                           size_t entries);
/* Node numbers cell after cell into `cells`, cell_count * nodes_per_cell entries. */
TEPOR_C_API tepor_status tepor_mesh_cells(tepor_session* session, const tepor_mesh* mesh, int32_t* cells,
                                          size_t entries);
/* Position of the region of every cell, `cell_count` entries. */
TEPOR_C_API tepor_status tepor_mesh_regions(tepor_session* session, const tepor_mesh* mesh, int32_t* regions,
                                            size_t entries);
/* Names by position; 0 and NULL for NULL or beyond the last. Valid as long as the mesh. */
TEPOR_C_API size_t tepor_mesh_region_count(const tepor_mesh* mesh);
TEPOR_C_API const char* tepor_mesh_region_name(const tepor_mesh* mesh, size_t region);
TEPOR_C_API size_t tepor_mesh_face_count(const tepor_mesh* mesh);
TEPOR_C_API const char* tepor_mesh_face_name(const tepor_mesh* mesh, size_t face);
/* What the maker wants said, such as slivers merged; by position. */
TEPOR_C_API size_t tepor_mesh_remark_count(const tepor_mesh* mesh);
TEPOR_C_API const char* tepor_mesh_remark(const tepor_mesh* mesh, size_t remark);

#ifdef __cplusplus
}
#endif

#endif
