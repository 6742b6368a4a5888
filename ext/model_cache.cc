#include "ext/model_cache.h"

#include <algorithm>
#include <atomic>
#include <utility>

#include "ext/model_text.h"

namespace ladderline {
#ifdef LADDERLINE_TESTING
namespace {
std::atomic<std::int64_t> parses = 0;
}
std::int64_t ModelParses() { return parses; }
#endif

ModelInHand::ModelInHand(Model m) {
  if (m.refused()) {
    refused = std::move(m);
  } else {
    predictor.emplace(std::move(m));
    inputs.resize(predictor->input_count());
  }
}

const std::shared_ptr<ModelInHand>* ModelCache::Find(std::string_view text) {
  ++clock_;
  for (Entry& entry : entries_) {
    // Equally long texts of other models soon differ, in their counts of rows.
    if (entry.text == text) {
      entry.last_used = clock_;
      return &entry.model;
    }
  }
  return nullptr;
}

Result<const std::shared_ptr<ModelInHand>*> ModelCache::Parse(std::string_view text) {
#ifdef LADDERLINE_TESTING
  ++parses;
#endif
  Result<Model> model = ModelFromText(text);
  if (!model.ok()) return Error{model.error()};
  auto parsed = std::make_shared<ModelInHand>(std::move(model).value());
  MakeRoom(text.size());
  entries_.push_back({std::string(text), std::move(parsed), clock_});
  return &entries_.back().model;
}

void ModelCache::MakeRoom(size_t bytes) {
  for (const Entry& entry : entries_) bytes += entry.text.size();
  while (!entries_.empty() && (entries_.size() >= kMostModels || bytes > kMostBytes)) {
    const auto oldest =
        std::min_element(entries_.begin(), entries_.end(),
                         [](const Entry& a, const Entry& b) { return a.last_used < b.last_used; });
    bytes -= oldest->text.size();
    entries_.erase(oldest);
  }
}

}  // namespace ladderline
