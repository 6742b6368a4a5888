#include "ext/model_argument.h"

#include <algorithm>
#include <cmath>
#include <limits>
#include <memory>
#include <string>

#include "core/support/text.h"
#include "core/transform/calendar.h"
#include "ext/connection.h"
#include "ext/registry.h"

namespace ladderline {
namespace {

constexpr const char* kModel = "a model made by this extension";

// A text of the host as it lies: asking for it as text would copy every long one that comes from a
// table, to end it with a NUL. In a database that keeps text as UTF-16 it has to be converted; a
// model starts with `{`, so that one of its first two bytes is then 0.
std::string_view LongText(sqlite3_value* value) {
  const std::string_view bytes = BytesOf(value);
  const bool wide = bytes.size() >= 2 && (bytes[0] == '\0' || bytes[1] == '\0');
  return wide ? TextOf(value) : bytes;
}

// What a value is as a model. With neither, it is missing.
struct Reading {
  const std::shared_ptr<ModelInHand>* model = nullptr;
  std::optional<std::string> flaw;  // why it is none: empty for what is no text
};

Reading ReadModel(const Arguments& arguments, int i) {
  sqlite3_value* value = arguments.value(i);
  const int type = sqlite3_value_type(value);
  if (type == SQLITE_NULL) return {};
  if (type != SQLITE_TEXT) return {nullptr, ""};
  const std::string_view text = LongText(value);
  ModelCache& models = arguments.connection().models;
  if (const auto* model = models.Find(text)) return {model, {}};
  if (IsBlank(text)) return {};
  const Result<const std::shared_ptr<ModelInHand>*> model = models.Parse(text);
  if (!model.ok()) return {nullptr, " (" + model.error() + ")"};
  return {model.value(), {}};
}

// Null for a missing model.
const std::shared_ptr<ModelInHand>* FindModel(const Arguments& arguments, int i = 0) {
  const Reading reading = ReadModel(arguments, i);
  if (reading.flaw) {
    arguments.Throw(ArgumentName(arguments.row(), i) + " must be " + kModel + ", got " +
                    Describe(arguments.value(i)) + *reading.flaw);
  }
  return reading.model;
}

std::string InputNames(const Predictor& predictor) {
  std::string names;
  for (size_t i = 0; i < predictor.input_count(); ++i)
    names += (i == 0 ? "" : ", ") + predictor.input(i).name;
  return names;
}

// ---- Label–value pairs ----

using Pairing = ModelInHand::Pairing;

// Calls with the same labels find their pairing again; a statement has few such lists.
constexpr size_t kMostPairings = 8;

bool SameLabels(const Arguments& arguments, int first, const Pairing& pairing) {
  if (static_cast<size_t>(arguments.count() - first) != 2 * pairing.labels.size()) return false;
  int i = first;
  for (const std::string& label : pairing.labels) {
    if (sqlite3_value_type(arguments.value(i)) != SQLITE_TEXT) return false;
    if (TextOf(arguments.value(i)) != label) return false;
    i += 2;
  }
  return true;
}

Pairing Pair(const Arguments& arguments, int first, const Predictor& predictor) {
  Pairing pairing;
  for (int i = first; i < arguments.count(); i += 2) {
    sqlite3_value* value = arguments.value(i);
    if (sqlite3_value_type(value) != SQLITE_TEXT) {
      arguments.Throw("label " + std::to_string((i - first) / 2 + 1) + " must be text, got " +
                      Describe(value) + "; write labels in single quotes");
    }
    const std::string label(TextOf(value));
    std::optional<int> target;
    for (size_t k = 0; k < predictor.input_count() && !target; ++k) {
      if (predictor.input(k).name == label) target = static_cast<int>(k);
    }
    for (const ModelColumn& column : predictor.model().columns) {
      if (column.role == ColumnRole::kWeight && column.name == label) target = Pairing::kWeight;
    }
    if (!target) {
      arguments.Throw("label '" + Excerpt(label, 60) +
                      "' is no input of the model; its inputs are " + InputNames(predictor));
    }
    if (std::find(pairing.target.begin(), pairing.target.end(), *target) != pairing.target.end())
      arguments.Throw("label '" + Excerpt(label, 60) + "' is given twice");
    pairing.labels.push_back(label);
    pairing.target.push_back(*target);
  }
  return pairing;
}

const Pairing& FindPairing(const Arguments& arguments, int first, ModelInHand& model) {
  std::vector<Pairing>& known = model.pairings;
  for (auto pairing = known.begin(); pairing != known.end(); ++pairing) {
    if (SameLabels(arguments, first, *pairing)) return *pairing;
  }
  Pairing pairing = Pair(arguments, first, *model.predictor);
  if (known.size() == kMostPairings) known.pop_back();
  return *known.insert(known.begin(), std::move(pairing));
}

// ---- Values ----

bool IsInputName(const Predictor& predictor, sqlite3_value* value) {
  if (sqlite3_value_type(value) != SQLITE_TEXT) return false;
  for (size_t i = 0; i < predictor.input_count(); ++i) {
    if (predictor.input(i).name == TextOf(value)) return true;
  }
  return false;
}

[[noreturn]] void ThrowLacksInputs(const Arguments& arguments, const Predictor& predictor,
                                   const Pairing& pairing) {
  std::string omitted;
  for (size_t i = 0; i < predictor.input_count(); ++i) {
    if (std::find(pairing.target.begin(), pairing.target.end(), static_cast<int>(i)) ==
        pairing.target.end())
      omitted += (omitted.empty() ? "" : ", ") + predictor.input(i).name;
  }
  arguments.Throw("the pairs leave out " + omitted +
                  "; they must name every input: " + InputNames(predictor));
}

[[noreturn]] void ThrowBadInput(const Arguments& arguments, const ModelColumn& column,
                                const char* requirement, sqlite3_value* value) {
  arguments.Throw(column.name + " " + requirement + ", got " + Describe(value));
}

// Inputs are filled where they are: copying one that was just written in parts stalls the
// processor.

// Numbers in the host's rendering.
void ReadText(const Arguments& arguments, const ModelColumn& column, sqlite3_value* value,
              Input& out) {
  out.kind = Input::Kind::kMissing;
  if (sqlite3_value_type(value) == SQLITE_NULL) return;
  if (sqlite3_value_type(value) == SQLITE_BLOB)
    ThrowBadInput(arguments, column, "must be text", value);
  const std::string_view text = TextOf(value);
  if (IsBlank(text)) return;
  if (!IsUtf8(text)) ThrowBadInput(arguments, column, "must be UTF-8 text", value);
  out.kind = Input::Kind::kText;
  out.text = text;
}

void ReadInput(const Arguments& arguments, const Predictor& predictor, size_t i,
               sqlite3_value* value, Input& out) {
  if (predictor.TakesText(i)) return ReadText(arguments, predictor.input(i), value, out);
  if (const int type = sqlite3_value_type(value); type == SQLITE_FLOAT || type == SQLITE_INTEGER)
      [[likely]] {
    out.number = sqlite3_value_double(value);
    out.kind = Input::Kind::kNumber;
    if (std::isfinite(out.number)) [[likely]]
      return;
  }
  const NumberReading reading = ReadNumber(value);
  if (reading.kind == NumberReading::Kind::kBad)
    ThrowBadInput(arguments, predictor.input(i), "must be a number", value);
  const bool missing = reading.kind == NumberReading::Kind::kMissing;
  out.kind = missing ? Input::Kind::kMissing : Input::Kind::kNumber;
  out.number = reading.number;
}

std::optional<double> ReadWeight(const Arguments& arguments, const Model& model,
                                 sqlite3_value* value) {
  const NumberReading reading = ReadNumber(value);
  if (reading.kind == NumberReading::Kind::kMissing) return std::nullopt;
  if (reading.kind == NumberReading::Kind::kBad || reading.number < 0) {
    const auto weight =
        std::find_if(model.columns.begin(), model.columns.end(),
                     [](const ModelColumn& c) { return c.role == ColumnRole::kWeight; });
    ThrowBadInput(arguments, *weight, "must be a number of at least 0", value);
  }
  return reading.number;
}

}  // namespace

ModelInHand* ModelArgument(const Call& call) {
  using Holder = std::shared_ptr<ModelInHand>;
  if (auto* held = static_cast<Holder*>(sqlite3_get_auxdata(call.context(), 0))) return held->get();
  const Holder* model = FindModel(call);
  if (model == nullptr) return nullptr;
  ModelInHand* in_hand = model->get();
  // The host keeps data beside an argument only if that is constant, and does not say which are:
  // for all others it would be made and thrown away on every row. So it is offered now and then.
  constexpr unsigned kOfferEvery = 16;
  if (++call.connection().model_lookups % kOfferEvery == 0) {
    sqlite3_set_auxdata(call.context(), 0, new Holder(*model),
                        [](void* holder) { delete static_cast<Holder*>(holder); });
  }
  return in_hand;
}

ModelInHand* TableModelArgument(const TableCall& call) {
  const std::shared_ptr<ModelInHand>* model = FindModel(call);
  return model == nullptr ? nullptr : model->get();
}

std::shared_ptr<ModelInHand> HoldModelArgument(const Arguments& arguments, int i) {
  const std::shared_ptr<ModelInHand>* model = FindModel(arguments, i);
  return model == nullptr ? nullptr : *model;
}

std::optional<std::string> ModelFlaw(const Arguments& arguments, int i) {
  const Reading reading = ReadModel(arguments, i);
  if (reading.flaw) return Describe(arguments.value(i)) + " is not " + kModel + *reading.flaw;
  if (reading.model == nullptr) return "no model";
  return std::nullopt;
}

std::optional<double> LevelArgument(const Arguments& arguments, int i) {
  const std::optional<double> level = arguments.Number(i);
  if (level && !(*level > 0 && *level < 1))
    arguments.ThrowBad(i, "must lie between 0 and 1", LevelAdvice(*level));
  return level;
}

std::optional<double> LevelBeforeInputs(const Arguments& arguments, int i) {
  const NumberReading level = ReadNumber(arguments.value(i));
  if (level.kind == NumberReading::Kind::kMissing) return std::nullopt;
  if (level.kind != NumberReading::Kind::kNumber || !(level.number > 0 && level.number < 1)) {
    arguments.Throw(ArgumentName(arguments.row(), i) + " must lie between 0 and 1, got " +
                    Describe(arguments.value(i)) + "; it comes before the inputs");
  }
  return level.number;
}

double ResponseArgument(const Arguments& arguments, int i, const Model& model) {
  if (!model.response().IsDate()) return arguments.Number(i).value_or(kNaN);
  Input date;
  ReadText(arguments, model.response(), arguments.value(i), date);
  const std::optional<int> days =
      date.kind == Input::Kind::kText ? DaysOfDate(date.text) : std::nullopt;
  return days ? *days : kNaN;
}

void ReadInputs(const Arguments& arguments, int first, ModelInHand& model) {
  const Predictor& predictor = *model.predictor;
  const auto given = static_cast<size_t>(arguments.count() - first);
  const size_t inputs = predictor.input_count();
  model.weight = 1;
  if (given == inputs) {
    for (size_t i = 0; i < inputs; ++i) {
      ReadInput(arguments, predictor, i, arguments.value(first + static_cast<int>(i)),
                model.inputs[i]);
    }
  } else if (given == 2 * inputs || given == 2 * inputs + 2) {
    const Pairing& pairing = FindPairing(arguments, first, model);
    size_t found = 0;
    for (size_t pair = 0; pair < pairing.target.size(); ++pair) {
      sqlite3_value* value = arguments.value(first + 2 * static_cast<int>(pair) + 1);
      if (pairing.target[pair] == Pairing::kWeight) {
        model.weight = ReadWeight(arguments, predictor.model(), value);
      } else {
        const auto i = static_cast<size_t>(pairing.target[pair]);
        ReadInput(arguments, predictor, i, value, model.inputs[i]);
        ++found;
      }
    }
    if (found != inputs) ThrowLacksInputs(arguments, predictor, pairing);
  } else {
    if (given % 2 == 0 && given > 0 && IsInputName(predictor, arguments.value(first)))
      ThrowLacksInputs(arguments, predictor, Pair(arguments, first, predictor));
    const bool after_level = first == 2 && ArgumentName(arguments.row(), 1) == "level";
    arguments.Throw((after_level ? "after the level the model" : "the model") +
                    std::string(" takes ") + std::to_string(inputs) +
                    (inputs == 1 ? " input (" : " inputs (") + InputNames(predictor) +
                    ") in this order, or as label–value pairs; got " + std::to_string(given) +
                    (given == 1 ? " value" : " values"));
  }
  predictor.Resolve(model.inputs, model.row);
}

}  // namespace ladderline
