#include "files/coefficient_layout.hpp"

#include <fmt/format.h>

#include <cmath>

namespace tambour::layout {
namespace {

template <class Value>
struct Name {
  Value value;
  const char* text;
};

constexpr Name<Edge> edges[] = {{Edge::dirichlet, "dirichlet"}, {Edge::neumann, "neumann"}};
constexpr Name<Background> backgrounds[] = {{Background::none, "none"},
                                            {Background::constant, "constant"},
                                            {Background::linear, "linear"},
                                            {Background::quadratic, "quadratic"}};
constexpr Name<Scaling> scalings[] = {{Scaling::none, "none"}, {Scaling::outside_sd, "outside_sd"}};

template <class Value, std::size_t count>
std::string name_of(const Name<Value> (&names)[count], Value value) {
  for (const auto& name : names)
    if (name.value == value) return name.text;
  throw Hdf5Failure("an option has a value without a name");
}

double number(hid_t file, const char* name) {
  if (const auto value = read_number_attribute(file, name)) return *value;
  throw Hdf5Failure(fmt::format("attribute {} is missing or not a number", name));
}

std::string text(hid_t file, const char* name) {
  if (const auto value = read_text_attribute(file, name)) return *value;
  throw Hdf5Failure(fmt::format("attribute {} is missing or not a string", name));
}

template <class Value, std::size_t count>
Value named(hid_t file, const char* attribute, const Name<Value> (&names)[count]) {
  const std::string told = text(file, attribute);
  std::string allowed;
  for (const auto& name : names) {
    if (told == name.text) return name.value;
    allowed += (allowed.empty() ? "" : ", ") + std::string(name.text);
  }
  throw Hdf5Failure(fmt::format("attribute {} is \"{}\"; allowed are {}", attribute, told, allowed));
}

std::ptrdiff_t size_attribute(hid_t file, const char* name) {
  const double value = number(file, name);
  constexpr double largest = 1 << 30;
  if (value >= 1 && value <= largest && value == std::floor(value)) return static_cast<std::ptrdiff_t>(value);
  throw Hdf5Failure(fmt::format("attribute {} is {}; allowed are 1 to {}", name, value, largest));
}

using Pairs = std::vector<std::pair<std::string, std::string>>;

void write_pairs(hid_t group, const char* name, const Pairs& pairs) {
  std::vector<std::string> flat;
  for (const auto& [first, second] : pairs) {
    flat.push_back(first);
    flat.push_back(second);
  }
  const auto space = simple_space({pairs.size(), 2});
  const auto type = string_type();
  const Hdf5Handle creation(H5Pcreate(H5P_DATASET_CREATE), H5Pclose, "set up a dataset");
  checked(H5Pset_obj_track_times(creation.get(), false), "set up a dataset");
  const Hdf5Handle dataset(H5Dcreate2(group, name, type.get(), space.get(), H5P_DEFAULT, creation.get(), H5P_DEFAULT),
                           H5Dclose, "make a dataset");
  write_strings(dataset.get(), H5S_ALL, H5S_ALL, flat);
}

Pairs read_pairs(hid_t group, const char* name) {
  const auto dataset = open_dataset(group, name);
  const auto dimensions = dimensions_of(dataset.get());
  if (dimensions.size() != 2 || dimensions[1] != 2)
    throw Hdf5Failure(fmt::format("/provenance/{} is not a table of two columns", name));
  const auto flat = read_strings(dataset.get(), H5S_ALL, H5S_ALL, static_cast<std::size_t>(2 * dimensions[0]));
  Pairs pairs;
  for (std::size_t i = 0; i < flat.size(); i += 2) pairs.emplace_back(flat[i], flat[i + 1]);
  return pairs;
}

}  // namespace

Hdf5Handle complex_type(hid_t part) {
  const std::size_t bytes = H5Tget_size(part);
  Hdf5Handle type(H5Tcreate(H5T_COMPOUND, 2 * bytes), H5Tclose, "make a type");
  checked(H5Tinsert(type.get(), "r", 0, part), "make a type");
  checked(H5Tinsert(type.get(), "i", bytes, part), "make a type");
  return type;
}

void write_header(hid_t file, const CoefficientHeader& header) {
  write_attribute(file, "schema_version", schema_version);
  write_attribute(file, "radius", header.geometry.radius);
  write_attribute(file, "edge", name_of(edges, header.geometry.edge));
  write_attribute(file, "bandlimit", header.geometry.bandlimit);
  write_attribute(file, "rows", static_cast<long long>(header.rows));
  write_attribute(file, "columns", static_cast<long long>(header.columns));
  write_attribute(file, "precision", std::string(header.double_precision ? "double" : "single"));
  write_attribute(file, "tolerance", header.tolerance);
  write_attribute(file, "pixel_size", header.pixel_size.value);
  write_attribute(file, "unit", header.pixel_size.unit);
  write_attribute(file, "solver", header.solver);
  write_attribute(file, "preparation_background", name_of(backgrounds, header.preparation.background));
  write_attribute(file, "preparation_scaling", name_of(scalings, header.preparation.scaling));
  write_attribute(file, "preparation_invert_contrast", static_cast<long long>(header.preparation.invert_contrast));
}

CoefficientHeader read_header(hid_t file) {
  const auto schema = read_number_attribute(file, "schema_version");
  if (!schema) throw Hdf5Failure("not a coefficient file: attribute schema_version is missing");
  if (!(*schema >= 1 && *schema <= schema_version))
    throw Hdf5Failure(fmt::format("schema_version is {}; this program reads 1 to {}", *schema, schema_version));
  CoefficientHeader header;
  header.geometry.radius = number(file, "radius");
  header.geometry.edge = named(file, "edge", edges);
  header.geometry.bandlimit = number(file, "bandlimit");
  header.rows = size_attribute(file, "rows");
  header.columns = size_attribute(file, "columns");
  const std::string precision = text(file, "precision");
  if (precision != "single" && precision != "double")
    throw Hdf5Failure(fmt::format("attribute precision is \"{}\"; allowed are single, double", precision));
  header.double_precision = precision == "double";
  header.tolerance = number(file, "tolerance");
  header.pixel_size = {number(file, "pixel_size"), text(file, "unit")};
  header.solver = text(file, "solver");
  header.preparation.background = named(file, "preparation_background", backgrounds);
  header.preparation.scaling = named(file, "preparation_scaling", scalings);
  header.preparation.invert_contrast = number(file, "preparation_invert_contrast") != 0;
  return header;
}

void write_provenance(hid_t file, const Provenance& provenance) {
  const Hdf5Handle group(H5Gcreate2(file, "/provenance", H5P_DEFAULT, H5P_DEFAULT, H5P_DEFAULT), H5Gclose,
                         "make a group");
  write_attribute(group.get(), "command", provenance.command);
  write_attribute(group.get(), "version", provenance.version);
  write_pairs(group.get(), "libraries", provenance.libraries);
  write_pairs(group.get(), "options", provenance.options);
  write_pairs(group.get(), "inputs", provenance.inputs);
}

Provenance read_provenance(hid_t file) {
  const Hdf5Handle group(H5Gopen2(file, "/provenance", H5P_DEFAULT), H5Gclose, "open /provenance");
  Provenance provenance;
  provenance.command = text(group.get(), "command");
  provenance.version = text(group.get(), "version");
  provenance.libraries = read_pairs(group.get(), "libraries");
  provenance.options = read_pairs(group.get(), "options");
  provenance.inputs = read_pairs(group.get(), "inputs");
  return provenance;
}

}  // namespace tambour::layout
