// Fuzz target: any bytes as a model's text. What is taken as a model must survive its own writing
// and answer questions; nothing may crash, hang or read where it should not.
//
//   build/fuzz/tests/model_text_fuzz tests/fuzz/model_text
#include <cstddef>
#include <cstdint>

#include "core/model/predict.h"
#include "core/release/release.h"
#include "core/report/difference.h"
#include "ext/model_text.h"

extern "C" int LLVMFuzzerTestOneInput(const std::uint8_t* data, std::size_t size) {
  using namespace ladderline;
  const std::string_view text(reinterpret_cast<const char*>(data), size);
  const Result<Model> model = ModelFromText(text);
  if (!model.ok()) {
    if (model.error().empty()) __builtin_trap();
    return 0;
  }
  const std::string written = ModelText(model.value());
  const Result<Model> again = ModelFromText(written);
  if (!again.ok() || ModelText(again.value()) != written) __builtin_trap();
  const Model released = ReleaseOf(model.value(), 3);
  const Result<Model> read = ModelFromText(ModelText(released));
  if (!read.ok()) __builtin_trap();
  (void)DifferencesOf(model.value(), released);
  if (model.value().refused()) return 0;

  const Predictor predictor(model.value());
  for (const double number : {-1e300, 0.0, 12.5, 1e300}) {
    std::vector<Input> inputs(predictor.input_count());
    for (std::size_t i = 0; i < inputs.size(); ++i) {
      const std::vector<CategoryLevel>& levels = predictor.input(i).levels;
      if (predictor.TakesText(i))
        inputs[i] = {.kind = Input::Kind::kText,
                     .text = levels.empty() ? std::string_view("2020-02-29") : levels[0].text};
      else
        inputs[i] = {.kind = Input::Kind::kNumber, .number = number};
    }
    PredictionRow row;
    predictor.Resolve(inputs, row);
    (void)predictor.FittedTypical(row);
    (void)predictor.FittedMean(row);
    (void)predictor.TypicalLimits(row, 0.95);
    (void)predictor.MeanLimits(row, 0.95);
    (void)predictor.CaseLimits(row, 0.95);
    (void)predictor.StudentizedResidual(row, number, 2);
    (void)predictor.CooksDistance(row, number);
    (void)predictor.Note(inputs, row);
  }
  return 0;
}
