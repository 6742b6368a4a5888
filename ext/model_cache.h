// Models at hand: a connection's recently used models, parsed.
//
// A model that is used once per row of a large table must not be parsed once per row. The host
// keeps a parsed model beside a constant argument (literal, bound parameter); models from a CTE, a
// subquery or a joined table are found here by their bytes.
#ifndef LADDERLINE_EXT_MODEL_CACHE_H_
#define LADDERLINE_EXT_MODEL_CACHE_H_

#include <cstdint>
#include <memory>
#include <optional>
#include <string>
#include <string_view>
#include <vector>

#include "core/model/predict.h"
#include "core/support/result.h"

namespace ladderline {

// A model ready to be asked, with the working space of one question at a time.
struct ModelInHand {
  explicit ModelInHand(Model m);

  // How the label–value pairs of a call map to inputs: `target` is an input, or kWeight.
  struct Pairing {
    static constexpr int kWeight = -1;
    std::vector<std::string> labels;
    std::vector<int> target;
  };

  const Model& model() const { return predictor ? predictor->model() : refused; }

  std::optional<Predictor> predictor;  // none for a refused model
  Model refused;
  std::vector<Pairing> pairings;  // see model_argument.cc
  // The row asked about last.
  std::vector<Input> inputs;
  PredictionRow row;
  std::optional<double> weight;  // NULL when given as NULL, else 1 unless given
};

class ModelCache {
 public:
  // The model of a text used recently, or null. The pointer is good until the next Parse; a copy of
  // what it points to, as long as wanted.
  const std::shared_ptr<ModelInHand>* Find(std::string_view text);
  // The model of another text; the error says why the text is none.
  Result<const std::shared_ptr<ModelInHand>*> Parse(std::string_view text);

 private:
  // As many groups as people join at once, at most so many bytes of text (parsed models are about
  // as large), and the latest model whatever its size.
  static constexpr size_t kMostModels = 16;
  static constexpr size_t kMostBytes = size_t{16} << 20;

  struct Entry {
    std::string text;
    std::shared_ptr<ModelInHand> model;
    std::uint64_t last_used;
  };
  // Drops the models not used for longest, until one of `bytes` fits.
  void MakeRoom(size_t bytes);

  std::vector<Entry> entries_;
  std::uint64_t clock_ = 0;
};

#ifdef LADDERLINE_TESTING
// Texts parsed into models so far, by all connections.
std::int64_t ModelParses();
#endif

}  // namespace ladderline

#endif  // LADDERLINE_EXT_MODEL_CACHE_H_
