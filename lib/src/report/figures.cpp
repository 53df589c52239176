// The sections that show pictures: the montage, the rebuilt images, the groups.
#include <fmt/format.h>

#include <algorithm>
#include <cmath>

#include "report/html.hpp"
#include "report/picture.hpp"
#include "report/sections.hpp"
#include "report/text.hpp"

namespace tambour::report {
namespace {

std::string tag(const std::string& verdict, int fold) {
  const char* kind = verdict_rank(verdict) < 2 ? "found" : "other";
  const std::string words = fold > 0 ? fmt::format("{}-fold", fold) : verdict_text(verdict, 0);
  return fmt::format("<span class=\"tag {}\">{}</span>", kind, words);
}

// The end of a name, which tells images of one file apart; whole characters only.
std::string tail(const std::string& name) {
  constexpr std::size_t longest = 40;
  if (name.size() <= longest) return name;
  std::size_t from = name.size() - longest;
  while (from < name.size() && (static_cast<unsigned char>(name[from]) & 0xC0U) == 0x80U) ++from;
  return "…" + name.substr(from);
}

std::string montage_tile(const ReportImage& image, const ReportData& data) {
  const std::string alt = fmt::format("Image {} from {}: {}; centre at x {}, y {} px", image.image, image.source,
                                      image.fold > 0 ? fmt::format("{}-fold", image.fold) : image.verdict,
                                      fixed_text(image.centre.x, 1), fixed_text(image.centre.y, 1));
  return fmt::format("<li>{}<p class=\"label\"><b>{}</b>{}</p><p class=\"source\" title=\"{}\">{}</p></li>\n",
                     overlaid_html(image.picture, {image.centre, data.radius, data.rows, data.columns}, alt),
                     image.image, tag(image.verdict, image.fold), escaped(image.source), escaped(tail(image.source)));
}

std::string cell(const ReportPicture& picture, const GreyRange& range, std::string_view name, std::size_t image) {
  return fmt::format("<div>{}<span>{}</span></div>",
                     picture_html(picture, range, fmt::format("Image {}, {}", image, name)), name);
}

std::string rebuild_row(const ReportRebuild& rebuild) {
  const GreyRange range = robust_range(rebuild.original);
  const double share = std::isfinite(rebuild.explained) ? std::clamp(100 * rebuild.explained, 0.0, 100.0) : 0;
  return fmt::format(
      "<li>{}{}{}<p class=\"explained\"><b>Image {}</b><span class=\"gauge\"><span "
      "style=\"width:{:.2f}%\"></span></span>{} explained</p></li>\n",
      cell(rebuild.original, range, "original", rebuild.image), cell(rebuild.rebuilt, range, "rebuilt", rebuild.image),
      cell(rebuild.residual, about_zero(range), "residual", rebuild.image), rebuild.image, share,
      share_text(rebuild.explained, 1));
}

std::string group_html(const ReportGroup& group) {
  std::string name = verdict_text(group.verdict, group.fold);
  if (!name.empty() && name[0] >= 'a' && name[0] <= 'z') name[0] = static_cast<char>(name[0] - 'a' + 'A');
  std::string html =
      fmt::format("<h3>{} <small>{}</small></h3>\n<ul class=\"strip\">\n", name, images_text(group.images));
  if (!group.mean.pixels.empty())
    html += fmt::format(
        "<li class=\"mean\">{}<p class=\"label\"><b>mean</b></p></li>\n",
        picture_html(group.mean, robust_range(group.mean), fmt::format("Mean of the aligned images: {}", name)));
  for (const auto& image : group.examples)
    html += fmt::format("<li>{}<p class=\"label\">{}</p></li>\n",
                        picture_html(image.picture, robust_range(image.picture),
                                     fmt::format("Image {} from {}, aligned", image.image, image.source)),
                        image.image);
  return html + "</ul>\n";
}

}  // namespace

std::string montage_section(const ReportData& data) {
  if (data.montage.empty()) return section("images", "Images", nothing("No images were chosen to be shown."));
  std::string html =
      "<p class=\"tools\"><button type=\"button\" id=\"overlay-switch\" hidden>Hide centres and disks</button></p>\n";
  html += "<ul class=\"montage\">\n";
  for (const auto& image : data.montage) html += montage_tile(image, data);
  html += "</ul>\n";
  const std::string caption = fmt::format(
      "{} of {}. Cross: rotation centre. Circle: the analysed disk of radius {}. Numbers count from 0 in the order of "
      "the input. Each picture has its own grey scale, from its 0.5 to its 99.5 percentile.",
      count_text(data.montage.size()), images_text(data.images), length_text(data.radius, data.pixel_size));
  return section("images", "Images", figure(html, caption));
}

std::string rebuilds_section(const ReportData& data) {
  constexpr std::string_view heading = "Rebuilt from the expansion";
  if (data.rebuilds.empty()) return section("rebuilt", heading, nothing("No images were rebuilt."));
  std::string html = "<ul class=\"rebuilds\">\n";
  for (const auto& rebuild : data.rebuilds) html += rebuild_row(rebuild);
  html += "</ul>\n";
  return section("rebuilt", heading,
                 figure(html,
                        "Original, image rebuilt from its coefficients, and what is left. The three pictures of a row "
                        "share one grey scale; in the residual mid-grey is zero. The percentage is the share of the "
                        "variance inside the disk that the expansion keeps, noise included. A residual that shows the "
                        "object means that the band limit or the disk is too small."));
}

std::string groups_section(const ReportData& data) {
  constexpr std::string_view heading = "Images by verdict, turned to agree";
  if (data.groups.empty()) return section("groups", heading, nothing("No images were grouped."));
  std::vector<const ReportGroup*> order;
  for (const auto& group : data.groups) order.push_back(&group);
  std::stable_sort(order.begin(), order.end(), [](const ReportGroup* a, const ReportGroup* b) {
    const int rank_a = verdict_rank(a->verdict), rank_b = verdict_rank(b->verdict);
    return rank_a != rank_b ? rank_a < rank_b : a->images > b->images;
  });
  std::string html =
      "<aside class=\"caution\"><p><strong>The means illustrate; they are no evidence.</strong> Images that were "
      "turned to agree with one another reinforce whatever they were turned by, noise included. An average of such "
      "images looks more symmetric than its images are, and testing it would overstate the significance.</p></aside>\n";
  for (const ReportGroup* group : order) html += group_html(*group);
  return section("groups", heading,
                 figure(html,
                        "Images of one verdict and fold, centred and turned so that the phases of their patterns "
                        "agree; framed: the mean of the group. Images without a fold have no angle and are centred "
                        "only. Each picture has its own grey scale."));
}

}  // namespace tambour::report
