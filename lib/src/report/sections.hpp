// The sections of the page, in their order. Each gives markup.
#pragma once

#include <string>

#include "report/facts.hpp"

namespace tambour::report {

std::string masthead(const ReportData& data);
std::string summary_section(const ReportData& data, const Facts& facts);
std::string settings_section(const ReportData& data);
std::string montage_section(const ReportData& data);
std::string evidence_section(const ReportData& data);
std::string spectrum_section(const ReportData& data, const Facts& facts);
std::string centres_section(const ReportData& data);
std::string rebuilds_section(const ReportData& data);
std::string groups_section(const ReportData& data);
std::string skipped_section(const ReportData& data);
std::string limits_section();
std::string provenance_section(const ReportData& data);

}  // namespace tambour::report
