// Where things lie in an MRC2014 header. Source: Cheng et al., J. Struct. Biol. 192 (2015) 146.
#pragma once

#include <cstddef>

#include "files/sample_type.hpp"

namespace tambour::mrc {

constexpr std::size_t header_bytes = 1024;

// Offsets in bytes; words have four.
constexpr std::size_t columns = 0, rows = 4, sections = 8;
constexpr std::size_t mode = 12;
constexpr std::size_t sampling = 28;  // MX MY MZ
constexpr std::size_t cell = 40;      // three lengths in angstrom
constexpr std::size_t angles = 52;    // three angles in degrees
constexpr std::size_t column_axis = 64;
constexpr std::size_t statistics = 76;  // DMIN DMAX DMEAN
constexpr std::size_t space_group = 88;
constexpr std::size_t extended_bytes = 92;
constexpr std::size_t version = 108;
constexpr std::size_t map_word = 208;
constexpr std::size_t machine_stamp = 212;
constexpr std::size_t rms = 216;
constexpr std::size_t label_count = 220;
constexpr std::size_t labels = 224, label_bytes = 80;

constexpr int little_endian_stamp = 0x44, big_endian_stamp = 0x11;
constexpr int current_version = 20141;

struct Mode {
  int mode;
  SampleType type;
};
constexpr Mode modes[] = {
    {0, SampleType::i1}, {1, SampleType::i2}, {2, SampleType::f4}, {6, SampleType::u2}, {12, SampleType::f2}};

}  // namespace tambour::mrc
