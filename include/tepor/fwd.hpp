#pragma once
// Forward declarations, for headers of your own that name the library's types without including them. Includes nothing.

namespace tepor {

// base: numbers, places, frames, errors
enum class ErrorCode : int;
class Error;
struct Point;
struct Planar;
struct Cylindrical;
struct Spherical;
class Frame;

// elements
template <int P>
struct Segment;
template <int P>
struct Triangle;
template <int P>
struct Quadrilateral;
struct ExactSegment;

// descriptions
enum class TemperatureScale;
class Parameter;
class Value;
class Table;
class Schedule;
class Law;
class LawFunction;
struct Latent;
struct Material;
struct Film;
struct Radiation;
struct Flux;
struct FixedTemperature;
struct Contact;
struct Generation;
struct SideFilm;
struct LocalHeat;
class Quantity;

// meshes and drawings
struct MeshData;
template <class E>
struct Mesh;
struct Layer;
struct LayersOptions;
class Tiles;
struct TilesOptions;
struct Shape;
class Section;
struct Meshing;
struct MeshArrays;
struct MeshReport;
struct Location;

// bodies, fields and their balances
class Body;
struct BodyOptions;
class Model;
struct Values;
class Field;
struct SolvePass;
struct Balance;
struct FaceHeat;
struct RegionHeat;

// solving and marching
struct SteadyOptions;
class Engine;
class March;
struct Theta;
struct Adaptive;
class Initial;
class Step;
enum class Verdict : int;
class Probe;
class Input;
class Integral;
class Peak;
struct Moment;
class Checkpoint;
struct Periodic;

// linear solvers
struct SparseMatrix;
class AnySolver;
class SparseCholesky;
struct MultigridOptions;
class Multigrid;
class MultigridSolver;
struct IterationLimits;
struct IterationReport;

// answers
class Gradient;
struct PeakGradient;
struct BracketOptions;
struct Bracket;
struct EstimateOptions;
struct Estimate;
struct Target;
struct SizeOptions;
struct Sized;
struct SizedTogether;
struct Reading;
struct TimedReading;
struct Prior;
struct FitOptions;
class Fitted;
struct CompactOptions;
class StateSpace;

// checks and output
struct SelfCheck;
class Record;
struct PictureOptions;

} // namespace tepor
