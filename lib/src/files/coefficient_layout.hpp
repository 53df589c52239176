// Names and attributes of the coefficient file, in one place for its writer and its reader.
#pragma once

#include <complex>
#include <string>

#include "files/hdf5_handle.hpp"
#include "tambour/coefficient_file.hpp"

namespace tambour::layout {

constexpr long long schema_version = 1;

constexpr const char* coefficients = "/coefficients";
constexpr const char* angular_order = "/terms/angular_order";
constexpr const char* radial_index = "/terms/radial_index";
constexpr const char* root = "/terms/root";
constexpr const char* white_noise_gain = "/terms/white_noise_gain";
constexpr const char* centre = "/images/centre";
constexpr const char* source = "/images/source";
constexpr const char* status = "/images/status";
constexpr const char* noise_sd = "/images/noise_sd";
constexpr const char* noise_spectrum = "/images/noise_spectrum";
constexpr const char* noise_frequency = "/images/noise_frequency";
constexpr const char* background = "/images/background";

/// The compound of r and i that h5py takes for a complex number, of two floats or two doubles of the host or the file.
Hdf5Handle complex_type(hid_t part);

/// Attributes of the root group: all of the header but the noise frequencies and the provenance.
void write_header(hid_t file, const CoefficientHeader& header);
/// Throws Hdf5Failure naming what is missing or not allowed.
CoefficientHeader read_header(hid_t file);

/// The group /provenance.
void write_provenance(hid_t file, const Provenance& provenance);
Provenance read_provenance(hid_t file);

}  // namespace tambour::layout
