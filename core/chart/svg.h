// SVG as text: elements with escaped attributes and text, and the frame that every chart shares.
//
// A chart is 360 units wide, as a phone is, and as high as it needs to be. It takes the width it is
// given up to 32 times the text size of the page, so that its text has a readable size on every
// screen. Text and lines have the colour of the text around; marks have one that shows on light and
// on dark, or the custom property --chart-mark where the page sets it.
#ifndef LADDERLINE_CORE_CHART_SVG_H_
#define LADDERLINE_CORE_CHART_SVG_H_

#include <string>
#include <string_view>
#include <vector>

#include "core/chart/chart_text.h"

namespace ladderline {

inline constexpr double kChartWidth = 360;
inline constexpr double kChartMargin = 8;
inline constexpr double kTitleSize = 14, kTextSize = 12, kLineHeight = 1.3;
inline constexpr std::string_view kMarkColour = "var(--chart-mark,#2f7ec2)";

// A length or place as SVG has it: to hundredths.
std::string PixelText(double pixels);

enum class Anchor { kStart, kMiddle, kEnd };

class Svg {
 public:
  // Starts an element: `svg.Open("rect").Set("x", 3).Close()`.
  Svg& Open(const char* element);
  Svg& Set(const char* attribute, double pixels);  // to hundredths
  Svg& Set(const char* attribute, std::string_view text);
  Svg& Value(const char* attribute, double number);  // all digits
  // Ends the element, with a <title> that tells what it stands for, if any.
  void Close(std::string_view told = {});

  // One line of text at its baseline.
  void Text(double x, double baseline, Anchor anchor, std::string_view text,
            double size = kTextSize, Face face = Face::kPlain);
  // Lines under each other from `top`; where they end. `whole`: the text that they stand for.
  double Lines(double x, double top, const std::vector<std::string>& lines, double size, Face face,
               std::string_view whole);
  void Line(double x1, double y1, double x2, double y2, double opacity);

  // The document. Title and description are what a screen reader says, as its label: an id would
  // not be the only one of its kind where a page shows a chart twice.
  std::string Document(double height, std::string_view title, std::string_view description) const;

 private:
  std::string text_;
  const char* element_ = "";
};

}  // namespace ladderline

#endif  // LADDERLINE_CORE_CHART_SVG_H_
