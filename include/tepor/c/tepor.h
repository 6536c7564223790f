/* tepor.h: heat conduction in solids, for C and for languages that call C.
 *
 * The same grammar as in C++: parameters in, quantities out, verbs between. A body is described in a region, on a face,
 * between two regions, at a point. SI units throughout; temperatures in degC unless the body is made in kelvin.
 *
 * Every call that can fail takes a tepor_session first, returns a tepor_status, and leaves its full text in the session:
 *
 *     tepor_session* s = tepor_session_create();
 *     if (tepor_body_on_film(s, wall, "outer", tepor_number(8.0), tepor_number(25.0)) != TEPOR_OK)
 *         puts(tepor_session_message(s));
 *
 * Rules. Results are written only when TEPOR_OK is returned. What a `create` call wrote has to be freed by the matching
 * `free`, which accepts NULL; the order of freeing does not matter. Texts are UTF-8 and end in 0; they are copied. There is
 * no global state: one session and the handles used with it belong to one thread at a time, different threads use
 * sessions and handles of their own. No exception leaves the library. Any call may answer TEPOR_INVALID_ARGUMENT (a
 * pointer is NULL, a number is no member of its enumeration), TEPOR_OUT_OF_MEMORY or TEPOR_INTERNAL.
 *
 * Cautions: whether a surface may be touched, a fire resistance, the rating of a cable or the wall of a pressure vessel is
 * never decided by a computed temperature alone; local codes and licensed practice decide. */
#ifndef TEPOR_C_TEPOR_H
#define TEPOR_C_TEPOR_H

#include <stddef.h>
#include <stdint.h>

#if defined(_WIN32)
#define TEPOR_C_API
#elif defined(__GNUC__)
#define TEPOR_C_API __attribute__((visibility("default")))
#else
#define TEPOR_C_API
#endif

#ifdef __cplusplus
extern "C" {
#endif

/* Raised when a program built against an older header can no longer use the library. */
#define TEPOR_ABI_VERSION 1

/* ------------------------------------------------------------------------------------------------ status and session */

typedef enum tepor_status {
    TEPOR_OK = 0,
    TEPOR_INVALID_ARGUMENT = 1, /* a pointer is NULL, or a number is no member of its enumeration */
    TEPOR_OUT_OF_MEMORY = 2,
    TEPOR_BAD_VALUE = 10,       /* a value is not finite or outside its physical range */
    TEPOR_BAD_NAME = 11,        /* a region, face, parameter or quantity of that name does not exist or exists twice */
    TEPOR_BAD_UNIT = 12,        /* a value looks like another unit */
    TEPOR_WRONG_DIMENSION = 13, /* the statement does not fit the dimension or frame of the body */
    TEPOR_BAD_GEOMETRY = 20,
    TEPOR_BAD_MESH = 21,
    TEPOR_OUTSIDE = 22,  /* the place lies outside the body or has no single value */
    TEPOR_NO_LEVEL = 30, /* nothing sets the temperature level */
    TEPOR_MISSING = 31,
    TEPOR_CONTRADICTION = 32,
    TEPOR_UNUSED = 33, /* a statement or parameter has no effect */
    TEPOR_BAD_CONTACT = 34,
    TEPOR_OUTSIDE_TABLE = 40,
    TEPOR_BAD_LAW = 41, /* an own law returned a value that cannot be used, or stopped */
    TEPOR_NOT_CONVERGED = 50,
    TEPOR_SINGULAR = 51,
    TEPOR_NO_ANSWER = 52,
    TEPOR_NOT_CERTIFIABLE = 53,
    TEPOR_NOT_SUPPORTED = 54,
    TEPOR_CANCELLED = 55,
    TEPOR_BAD_FILE = 60,
    TEPOR_TOO_LARGE = 61,
    TEPOR_INTERNAL = 90
} tepor_status;

typedef struct tepor_session tepor_session;     /* the last message */
typedef struct tepor_parameter tepor_parameter; /* a named number */
typedef struct tepor_function tepor_function;   /* a table, a schedule or an own law */
typedef struct tepor_tiles tepor_tiles;         /* a drawing of rectangles */
typedef struct tepor_section tepor_section;     /* a drawing of any shapes */
typedef struct tepor_mesh tepor_mesh;
typedef struct tepor_body tepor_body;
typedef struct tepor_quantity tepor_quantity; /* a scalar asked of a temperature field */
typedef struct tepor_field tepor_field; /* a temperature field: a snapshot, later calls on the body do not touch it */
typedef struct tepor_march tepor_march; /* a body through time */

/* Version of the library, such as "0.1.0"; never NULL. */
TEPOR_C_API const char* tepor_version(void);
/* The TEPOR_ABI_VERSION the library was built with: compare before anything else. */
TEPOR_C_API int32_t tepor_abi_version(void);
/* Short name of a status, such as "bad_value", and a sentence on it; never NULL. */
TEPOR_C_API const char* tepor_status_name(tepor_status status);
TEPOR_C_API const char* tepor_status_text(tepor_status status);

/* NULL when memory has run out. */
TEPOR_C_API tepor_session* tepor_session_create(void);
TEPOR_C_API void tepor_session_free(tepor_session* session);
/* Full text of the last call that failed: what was given, what is wrong, what to do. "" when none has; never NULL. Valid
 * until the next call with this session. */
TEPOR_C_API const char* tepor_session_message(const tepor_session* session);
/* The name of the region, face, parameter, law or option at fault; "" when there is none; never NULL. */
TEPOR_C_API const char* tepor_session_offender(const tepor_session* session);

/* ------------------------------------------------------------------------------------------ numbers that may be more */

/* A parameter: a number with a name, in the unit of where it is used. Free-standing; each body keeps its own value, which
 * starts as the one given here. TEPOR_BAD_NAME (empty), TEPOR_BAD_VALUE (not finite). */
TEPOR_C_API tepor_status tepor_parameter_create(tepor_session* session, const char* name, double value,
                                                tepor_parameter** out);
TEPOR_C_API void tepor_parameter_free(tepor_parameter* parameter);

/* Whatever stands where a number is asked for: a number, a parameter or a function. Make it with the three calls below; a
 * value of all zeros says nothing. The object must live until the call that takes the value has returned. */
typedef struct tepor_value {
    int32_t kind; /* 0 nothing, 1 number, 2 parameter, 3 function, 4 number meant in kelvin though below 100 */
    int32_t reserved;
    double number;
    const void* object;
} tepor_value;

TEPOR_C_API tepor_value tepor_nothing(void);
TEPOR_C_API tepor_value tepor_number(double number);
/* A low absolute temperature [K] that is meant: radiating faces of kelvin bodies refuse plain numbers below 100. */
TEPOR_C_API tepor_value tepor_kelvin(double temperature);
TEPOR_C_API tepor_value tepor_of(const tepor_parameter* parameter);
TEPOR_C_API tepor_value tepor_by(const tepor_function* function);

/* A property over temperature [degC, or K in a kelvin body], linear between `count` points of rising temperature. Outside
 * its range it is refused on the solution, or holds its end value when `hold` is not 0. TEPOR_BAD_VALUE. */
TEPOR_C_API tepor_status tepor_table_create(tepor_session* session, const double* temperature, const double* value,
                                            size_t count, int32_t hold, tepor_function** out);
/* A value over time [s]: each of the `count` values holds from its time on, or with `ramps` not 0 straight lines join them.
 * Its energy is exact whatever the step. TEPOR_BAD_VALUE. */
TEPOR_C_API tepor_status tepor_schedule_create(tepor_session* session, const double* time, const double* value,
                                               size_t count, int32_t ramps, tepor_function** out);

/* Points at which an own law is asked: arrays of `count` entries. */
typedef struct tepor_points {
    size_t count;
    const double* temperature; /* [degC, or K in a kelvin body]; NULL when the law was said not to use it */
    const double* fluid;       /* temperature beyond the face, same scale; NULL inside a body */
    const double* x;           /* x or radius [m] */
    const double* y;           /* y or axial coordinate [m]; zeros in 1D */
    double time;               /* [s]; 0 in a steady state */
    const double* parameters;  /* present values of the law's parameters, in their order */
    size_t parameter_count;
} tepor_points;

/* An own law: fills value[0 .. count) and, when `slope` is not NULL and it knows them, derivatives by temperature [per K].
 * It is called once per batch of points. Returns 0, or any other number to stop the solve: TEPOR_BAD_LAW shows it. A law
 * that does not fill slopes is created with `own_slope` 0, and slopes are taken by differences. */
typedef int32_t (*tepor_law_callback)(const tepor_points* points, double* value, double* slope, void* user_data);

/* A law with `parameter_count` parameters (NULL and 0: none). `uses_temperature` 0: of place and time alone, the body stays
 * linear. `name` shows in messages. `user_data` is passed through and must outlive every body that uses the law. */
TEPOR_C_API tepor_status tepor_law_create(tepor_session* session, const char* name, tepor_law_callback callback,
                                          void* user_data, const tepor_parameter* const* parameters,
                                          size_t parameter_count, int32_t uses_temperature, int32_t own_slope,
                                          tepor_function** out);
TEPOR_C_API void tepor_function_free(tepor_function* function);

/* -------------------------------------------------------------------------------------------------------------- meshes */

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
    double grading;        /* last cell over first; 1 or 0: equal cells */
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
TEPOR_C_API tepor_status tepor_section_cut_rectangle(tepor_session* session, tepor_section* section, const char* face,
                                                     double x0, double y0, double x1, double y1);
TEPOR_C_API tepor_status tepor_section_cut_circle(tepor_session* session, tepor_section* section, const char* face,
                                                  double x, double y, double radius);
TEPOR_C_API tepor_status tepor_section_cut_polygon(tepor_session* session, tepor_section* section, const char* face,
                                                   const double* corners, size_t count);
/* Names the outer edge between two points of it, along the shorter way. */
TEPOR_C_API tepor_status tepor_section_face(tepor_session* session, tepor_section* section, const char* face, double x0,
                                            double y0, double x1, double y1);
/* Names all outer edge that has no name. */
TEPOR_C_API tepor_status tepor_section_rest(tepor_session* session, tepor_section* section, const char* face);
/* A line inside that cell sides follow, and a point where a node must be. */
TEPOR_C_API tepor_status tepor_section_line(tepor_session* session, tepor_section* section, double x0, double y0,
                                            double x1, double y1);
TEPOR_C_API tepor_status tepor_section_hold(tepor_session* session, tepor_section* section, double x, double y);
/* Triangles of about `size` [m]. TEPOR_BAD_GEOMETRY names place and cause. */
TEPOR_C_API tepor_status tepor_section_mesh(tepor_session* session, const tepor_section* section, tepor_element element,
                                            double size, tepor_frame frame, tepor_mesh** out);

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

/* ---------------------------------------------------------------------------------------------------------------- body */

/* A body on a mesh (which is copied). `kelvin` not 0: all temperatures are in kelvin. */
TEPOR_C_API tepor_status tepor_body_create(tepor_session* session, const tepor_mesh* mesh, int32_t kelvin,
                                           tepor_body** out);
/* An independent body described alike. */
TEPOR_C_API tepor_status tepor_body_copy(tepor_session* session, const tepor_body* body, tepor_body** out);
TEPOR_C_API void tepor_body_free(tepor_body* body);

/* In a region. Conductivity [W/(m K)]; density [kg/m3] and specific heat [J/(kg K)] count in marching only and may be
 * tepor_nothing(). TEPOR_BAD_NAME, TEPOR_BAD_VALUE, TEPOR_BAD_UNIT, TEPOR_CONTRADICTION. */
TEPOR_C_API tepor_status tepor_body_in_material(tepor_session* session, tepor_body* body, const char* region,
                                                tepor_value conductivity, tepor_value density,
                                                tepor_value specific_heat);
/* The same with conductivities along x (radius) and y (axis); 2D. */
TEPOR_C_API tepor_status tepor_body_in_orthotropic(tepor_session* session, tepor_body* body, const char* region,
                                                   tepor_value along_x, tepor_value along_y, tepor_value density,
                                                   tepor_value specific_heat);
/* The same with latent heat [J/kg] between solidus and liquidus [degC]. */
TEPOR_C_API tepor_status tepor_body_in_melting(tepor_session* session, tepor_body* body, const char* region,
                                               tepor_value conductivity, tepor_value density, tepor_value specific_heat,
                                               tepor_value latent_heat, tepor_value solidus, tepor_value liquidus);
/* Heat generated per volume [W/m3], or in all cells of the region together [W] for the frame's size. */
TEPOR_C_API tepor_status tepor_body_in_generation_per_volume(tepor_session* session, tepor_body* body,
                                                             const char* region, tepor_value watts_per_m3);
TEPOR_C_API tepor_status tepor_body_in_generation_total(tepor_session* session, tepor_body* body, const char* region,
                                                        tepor_value watts);
/* Loss from the sides of a bar with wetted perimeter [m] (1D planar, section = the frame's area), or of a plate of
 * thickness [m] wet on `wet_sides` 1 or 2. Coefficient [W/(m2 K)], fluid [degC]. */
TEPOR_C_API tepor_status tepor_body_in_side_film_bar(tepor_session* session, tepor_body* body, const char* region,
                                                     tepor_value coefficient, tepor_value fluid, tepor_value perimeter);
TEPOR_C_API tepor_status tepor_body_in_side_film_plate(tepor_session* session, tepor_body* body, const char* region,
                                                       tepor_value coefficient, tepor_value fluid,
                                                       tepor_value thickness, int32_t wet_sides);

/* On a face; different kinds add up, the same kind twice is TEPOR_CONTRADICTION. */
/* Film coefficient [W/(m2 K)], fluid [degC]. */
TEPOR_C_API tepor_status tepor_body_on_film(tepor_session* session, tepor_body* body, const char* face,
                                            tepor_value coefficient, tepor_value fluid);
/* Emissivity 0..1, surroundings [degC]. */
TEPOR_C_API tepor_status tepor_body_on_radiation(tepor_session* session, tepor_body* body, const char* face,
                                                 tepor_value emissivity, tepor_value surroundings);
/* Heat flux into, or out of, the body [W/m2]. */
TEPOR_C_API tepor_status tepor_body_on_flux_into(tepor_session* session, tepor_body* body, const char* face,
                                                 tepor_value flux);
TEPOR_C_API tepor_status tepor_body_on_flux_out_of(tepor_session* session, tepor_body* body, const char* face,
                                                   tepor_value flux);
/* Held at a temperature [degC]. */
TEPOR_C_API tepor_status tepor_body_on_fixed_temperature(tepor_session* session, tepor_body* body, const char* face,
                                                         tepor_value temperature);

/* Between two regions: contact conductance [W/(m2 K)] or resistance [m2 K/W]. TEPOR_BAD_CONTACT when they do not touch. */
TEPOR_C_API tepor_status tepor_body_between_conductance(tepor_session* session, tepor_body* body, const char* region,
                                                        const char* other, tepor_value conductance);
TEPOR_C_API tepor_status tepor_body_between_resistance(tepor_session* session, tepor_body* body, const char* region,
                                                       const char* other, tepor_value resistance);

/* At a point: heat [W] at (x, y) [m]; in 2D within a radius [m] inside which no temperature is read. */
TEPOR_C_API tepor_status tepor_body_at_local_heat(tepor_session* session, tepor_body* body, double x, double y,
                                                  tepor_value watts, double radius);

/* A new value of a parameter in this body. TEPOR_UNUSED, TEPOR_BAD_VALUE. */
TEPOR_C_API tepor_status tepor_body_set(tepor_session* session, tepor_body* body, const tepor_parameter* parameter,
                                        double value);
/* The present value of a parameter in this body. */
TEPOR_C_API tepor_status tepor_body_value(tepor_session* session, const tepor_body* body,
                                          const tepor_parameter* parameter, double* out);

/* ---------------------------------------------------------------------------------------------------------- quantities */

/* Temperature [degC] at (x, y) [m]; `region` "" unless a contact gives the place two temperatures. */
TEPOR_C_API tepor_status tepor_quantity_at(tepor_session* session, double x, double y, const char* region,
                                           tepor_quantity** out);
/* Mean, highest and lowest temperature [degC] in a region or on a face. */
TEPOR_C_API tepor_status tepor_quantity_mean_in(tepor_session* session, const char* region, tepor_quantity** out);
TEPOR_C_API tepor_status tepor_quantity_mean_on(tepor_session* session, const char* face, tepor_quantity** out);
TEPOR_C_API tepor_status tepor_quantity_hottest_in(tepor_session* session, const char* region, tepor_quantity** out);
TEPOR_C_API tepor_status tepor_quantity_coldest_in(tepor_session* session, const char* region, tepor_quantity** out);
TEPOR_C_API tepor_status tepor_quantity_hottest_on(tepor_session* session, const char* face, tepor_quantity** out);
TEPOR_C_API tepor_status tepor_quantity_coldest_on(tepor_session* session, const char* face, tepor_quantity** out);
/* Heat through a face, from one region to another, and generated in a region [W], for the frame's size. */
TEPOR_C_API tepor_status tepor_quantity_heat_out_through(tepor_session* session, const char* face,
                                                         tepor_quantity** out);
TEPOR_C_API tepor_status tepor_quantity_heat_in_through(tepor_session* session, const char* face, tepor_quantity** out);
TEPOR_C_API tepor_status tepor_quantity_heat_from(tepor_session* session, const char* region, const char* to,
                                                  tepor_quantity** out);
TEPOR_C_API tepor_status tepor_quantity_generated_in(tepor_session* session, const char* region, tepor_quantity** out);
TEPOR_C_API tepor_status tepor_quantity_stored_in(tepor_session* session, const char* region, tepor_quantity** out);
/* Heat flow from one face to another per kelvin between them [W/K]. */
TEPOR_C_API tepor_status tepor_quantity_conductance_between(tepor_session* session, const char* face, const char* to,
                                                            tepor_quantity** out);
TEPOR_C_API void tepor_quantity_free(tepor_quantity* quantity);

/* -------------------------------------------------------------------------------------------------------------- steady */

/* The steady temperature field of a body. TEPOR_NO_LEVEL, TEPOR_NOT_CONVERGED, TEPOR_SINGULAR, TEPOR_OUTSIDE_TABLE,
 * TEPOR_BAD_LAW, and whatever the description gets wrong. */
TEPOR_C_API tepor_status tepor_steady(tepor_session* session, const tepor_body* body, tepor_field** out);
TEPOR_C_API void tepor_field_free(tepor_field* field);
/* The value of a quantity, in its unit. */
TEPOR_C_API tepor_status tepor_field_value(tepor_session* session, const tepor_field* field,
                                           const tepor_quantity* quantity, double* out);
/* Node temperatures [degC] in the mesh's numbering (at a contact the first region's) into `temperature`, `entries` must be
 * the node count. */
TEPOR_C_API tepor_status tepor_field_temperatures(tepor_session* session, const tepor_field* field, double* temperature,
                                                  size_t entries);
/* Temperatures cell by cell, nodes_per_cell each: keeps the jumps of contacts. */
TEPOR_C_API tepor_status tepor_field_cell_temperatures(tepor_session* session, const tepor_field* field,
                                                       double* temperature, size_t entries);
/* [s]; 0 for a steady state and for NULL. */
TEPOR_C_API double tepor_field_time(const tepor_field* field);

/* The heat balance [W] for the frame's size. Set `size` to sizeof(tepor_balance) before the call: later versions append. */
typedef struct tepor_balance {
    size_t size;
    double in;        /* through faces and side films, inward */
    double out;       /* outward */
    double generated; /* by generation and local heat */
    double stored;    /* rate of storage; 0 at rest */
    double left_over; /* in + generated - out - stored, as computed; closure is never forced */
    double gross;     /* half the sum of all absolute flows */
    double floor;     /* what rounding can leave over */
    int32_t balanced; /* |left_over| <= 1e-10 gross + floor */
    int32_t reserved;
} tepor_balance;
TEPOR_C_API tepor_status tepor_field_balance(tepor_session* session, const tepor_field* field, tepor_balance* balance);

/* ------------------------------------------------------------------------------------------------------------- marching */

/* How to march. Start from tepor_march_options_default(), then change what is wanted. */
typedef struct tepor_march_options {
    size_t size;         /* sizeof(tepor_march_options) */
    double theta;        /* 0.5 to 1 */
    double step;         /* [s]; 0: adaptive steps */
    double tolerance;    /* adaptive: error per step [K] */
    double largest_step; /* adaptive [s]; 0: no limit */
    int32_t
        damped_start; /* four backward-Euler half steps at the start and after jumps of schedules; not 0 by default */
    int32_t newton_passes; /* fixed step, nonlinear: always this many; 0: until converged */
} tepor_march_options;
TEPOR_C_API tepor_march_options tepor_march_options_default(void);

/* A march from one temperature [degC], or from a field. TEPOR_BAD_VALUE, TEPOR_MISSING (density, specific heat). */
TEPOR_C_API tepor_status tepor_march_create(tepor_session* session, const tepor_body* body, double temperature,
                                            const tepor_march_options* options, tepor_march** out);
TEPOR_C_API tepor_status tepor_march_create_from(tepor_session* session, const tepor_body* body,
                                                 const tepor_field* field, const tepor_march_options* options,
                                                 tepor_march** out);
TEPOR_C_API void tepor_march_free(tepor_march* march);

/* Before the loop: names and places are resolved once; the numbers are handles for this march. */
TEPOR_C_API tepor_status tepor_march_watch(tepor_session* session, tepor_march* march, const tepor_quantity* quantity,
                                           int64_t* probe);
TEPOR_C_API tepor_status tepor_march_drive(tepor_session* session, tepor_march* march, const tepor_parameter* parameter,
                                           int64_t* input);

/* In the loop; these three neither fail nor allocate for linear bodies with a fixed step. */
/* A value that is not finite keeps the last one; the next advance then answers 1. */
TEPOR_C_API void tepor_march_set(tepor_march* march, int64_t input, double value);
/* NaN when the probe has no value. */
TEPOR_C_API double tepor_march_read(const tepor_march* march, int64_t probe);
/* One step. 0: done; 1: done with the last good input; otherwise the state is that before the step and the number is a
 * verdict: 10 not converged, 11 bad law, 12 outside a table, 13 singular, 14 step too small, 15 out of memory, 16 NULL. */
TEPOR_C_API int32_t tepor_march_advance(tepor_march* march);
TEPOR_C_API const char* tepor_verdict_text(int32_t verdict);
/* [s]; 0 for NULL. */
TEPOR_C_API double tepor_march_time(const tepor_march* march);

/* To the time exactly [s]. */
TEPOR_C_API tepor_status tepor_march_advance_to(tepor_session* session, tepor_march* march, double time);
/* Until the quantity passes the value, at the latest at `latest` [s] (0: no limit); the time of passing [s]. TEPOR_NO_ANSWER. */
TEPOR_C_API tepor_status tepor_march_time_to_reach(tepor_session* session, tepor_march* march,
                                                   const tepor_quantity* quantity, double value, double latest,
                                                   double* time);
TEPOR_C_API tepor_status tepor_march_value(tepor_session* session, const tepor_march* march,
                                           const tepor_quantity* quantity, double* out);
TEPOR_C_API tepor_status tepor_march_field(tepor_session* session, const tepor_march* march, tepor_field** out);
/* Mean of the last step [W], and sum over the run [J]. */
TEPOR_C_API tepor_status tepor_march_balance(tepor_session* session, const tepor_march* march, tepor_balance* balance);
TEPOR_C_API tepor_status tepor_march_total(tepor_session* session, const tepor_march* march, tepor_balance* balance);

/* ------------------------------------------------------------------------------------------------------------- answers */

/* A guaranteed interval of a quantity of the steady state, as narrow as `relative_width` asks or within `max_unknowns` and
 * `max_seconds`. Set `size` to sizeof(tepor_bracket_result). TEPOR_NOT_CERTIFIABLE names what no bound exists for. */
typedef struct tepor_bracket_result {
    size_t size;
    double lower;
    double value;
    double upper;
    int64_t cells;
    int64_t unknowns;
    int32_t reached; /* the width asked for was reached; else a budget was spent first */
    int32_t reserved;
} tepor_bracket_result;
TEPOR_C_API tepor_status tepor_bracket(tepor_session* session, const tepor_body* body, const tepor_quantity* quantity,
                                       double relative_width, int64_t max_unknowns, double max_seconds,
                                       tepor_bracket_result* result);

/* The derivative of a quantity by each of `count` parameters at a steady field: one extra solve for all of them. */
TEPOR_C_API tepor_status tepor_gradient(tepor_session* session, const tepor_field* field,
                                        const tepor_quantity* quantity, const tepor_parameter* const* parameters,
                                        size_t count, double* slope);

typedef enum tepor_target_kind { TEPOR_EQUAL_TO = 0, TEPOR_AT_MOST = 1, TEPOR_AT_LEAST = 2 } tepor_target_kind;

/* What a sizing found. `reason`: 0 found, 1 every value keeps the limit, 2 several answers (value is the nearest), 3 not
 * reachable (value comes nearest), 4 runaway, 5 the body has no meaning beyond failed_at. The session's message holds the
 * reason in words. Set `size` to sizeof(tepor_sized). */
typedef struct tepor_sized {
    size_t size;
    double value;   /* of the parameter */
    double reached; /* the quantity there */
    double failed_at;
    int64_t solves;
    int32_t reason;
    int32_t reserved;
} tepor_sized;
/* The value of a parameter at which a quantity meets a target, sought between `from` and `to` (both 0: from 1/100 to 100
 * times its value). The body stays as it was. */
TEPOR_C_API tepor_status tepor_size_for(tepor_session* session, const tepor_body* body,
                                        const tepor_parameter* parameter, const tepor_quantity* quantity,
                                        tepor_target_kind kind, double target, double from, double to,
                                        tepor_sized* result);

#ifdef __cplusplus
}
#endif

#endif
