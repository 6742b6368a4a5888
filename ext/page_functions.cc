// What a page of HTML needs of SQL: text and numbers that show as they are.
#include "core/chart/chart_text.h"
#include "core/support/markup.h"
#include "core/support/text.h"
#include "ext/function_tables.h"

namespace ladderline {
namespace {

void HtmlText(Call& call) {
  const std::optional<std::string_view> text = call.Text(0);
  if (!text) return call.ReturnNull();
  call.Return(MarkupText(*text));
}

void HtmlNumber(Call& call) {
  const std::optional<double> number = call.Number(0);
  if (!number) return call.ReturnNull();
  call.Return("<data value=\"" + NumberText(*number) + "\">" + ShownNumber(*number) + "</data>");
}

constexpr FunctionRow kRows[] = {
    Scalar("html_text", 1, 1, "text", HtmlText,
           "The text as it stands in HTML or SVG, in an element or in double quotes: marks are "
           "escaped, and characters that would break or turn around the page are replaced.",
           "", "SELECT html_text('<b> & \"quotes\"')"),
    Scalar("html_number", 1, 1, "x", HtmlNumber,
           "The number as HTML that shows three digits or the whole part, and holds them all.", "",
           "SELECT html_number(12.3456)"),
};

}  // namespace

std::span<const FunctionRow> PageFunctions() { return kRows; }

}  // namespace ladderline
