#include "core/chart/svg.h"

#include <cmath>

#include "core/support/markup.h"
#include "core/support/text.h"

namespace ladderline {
namespace {

constexpr const char* kAnchorNames[] = {"start", "middle", "end"};

}  // namespace

std::string PixelText(double pixels) {
  return NumberText(std::nearbyint(pixels * 100) / 100 + 0.0);
}

Svg& Svg::Open(const char* element) {
  element_ = element;
  text_ += '<';
  text_ += element;
  return *this;
}

Svg& Svg::Set(const char* attribute, double pixels) { return Set(attribute, PixelText(pixels)); }

Svg& Svg::Set(const char* attribute, std::string_view text) {
  text_ += ' ';
  text_ += attribute;
  text_ += "=\"" + MarkupText(text) + "\"";
  return *this;
}

Svg& Svg::Value(const char* attribute, double number) { return Set(attribute, NumberText(number)); }

void Svg::Close(std::string_view told) {
  if (told.empty()) {
    text_ += "/>\n";
    return;
  }
  text_ += "><title>" + MarkupText(told) + "</title></" + element_ + ">\n";
}

void Svg::Text(double x, double baseline, Anchor anchor, std::string_view text, double size,
               Face face) {
  Open("text").Set("x", x).Set("y", baseline);
  if (anchor != Anchor::kStart) Set("text-anchor", kAnchorNames[static_cast<int>(anchor)]);
  if (size != kTextSize) Set("font-size", size);
  if (face == Face::kBold) Set("font-weight", "600");
  text_ += ">" + MarkupText(text) + "</text>\n";
}

double Svg::Lines(double x, double top, const std::vector<std::string>& lines, double size,
                  Face face, std::string_view whole) {
  const bool shortened = !lines.empty() && lines.back().ends_with("\xE2\x80\xA6");
  if (shortened) text_ += "<g><title>" + MarkupText(whole) + "</title>\n";
  for (const std::string& line : lines) {
    Text(x, top + size, Anchor::kStart, line, size, face);
    top += size * kLineHeight;
  }
  if (shortened) text_ += "</g>\n";
  return top;
}

void Svg::Line(double x1, double y1, double x2, double y2, double opacity) {
  Open("line").Set("x1", x1).Set("y1", y1).Set("x2", x2).Set("y2", y2);
  Set("stroke", "currentColor").Set("stroke-opacity", opacity);
  Close();
}

std::string Svg::Document(double height, std::string_view title,
                          std::string_view description) const {
  const std::string safe_title = MarkupText(title), safe_description = MarkupText(description);
  return "<svg xmlns=\"http://www.w3.org/2000/svg\" viewBox=\"0 0 " + PixelText(kChartWidth) + " " +
         PixelText(height) + "\" role=\"img\" aria-label=\"" + safe_title +
         (safe_title.empty() ? "" : ". ") + safe_description +
         "\" direction=\"ltr\" font-family=\"system-ui, sans-serif\" font-size=\"" +
         PixelText(kTextSize) +
         "\" fill=\"currentColor\" style=\"display:block;width:100%;max-width:32rem;height:auto\">"
         "\n<title>" +
         safe_title + "</title>\n<desc>" + safe_description + "</desc>\n" + text_ + "</svg>";
}

}  // namespace ladderline
