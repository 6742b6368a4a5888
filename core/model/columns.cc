#include "core/model/columns.h"

#include <algorithm>
#include <bit>
#include <cassert>
#include <charconv>
#include <cstdio>
#include <cstring>
#include <numeric>

#include "core/describe/moments.h"
#include "core/support/hash.h"
#include "core/support/text.h"

namespace ladderline {
namespace {

std::uint64_t HashNumber(double number) {
  return Mix(std::bit_cast<std::uint64_t>(number + 0.0) + 1);  // −0 and 0 are one number
}

struct Plan {
  ColumnRole role;
  Wanted wanted;
};

std::optional<Plan> PlanOf(Label::Word word) {
  switch (word) {
    case Label::Word::kNone:
      return Plan{ColumnRole::kPredictor, Wanted::kUndecided};
    case Label::Word::kNumber:
    case Label::Word::kTransform:
    case Label::Word::kPolynomial:
      return Plan{ColumnRole::kPredictor, Wanted::kNumber};
    case Label::Word::kCategory:
      return Plan{ColumnRole::kPredictor, Wanted::kText};
    case Label::Word::kWeight:
      return Plan{ColumnRole::kWeight, Wanted::kNumber};
    case Label::Word::kCluster:
      return Plan{ColumnRole::kCluster, Wanted::kCluster};
    case Label::Word::kKey:
      return Plan{ColumnRole::kKey, Wanted::kKey};
    case Label::Word::kOrder:
      return Plan{ColumnRole::kOrder, Wanted::kOrder};
    case Label::Word::kPresent:
      return Plan{ColumnRole::kPresent, Wanted::kPresence};
    case Label::Word::kProduct:
      return Plan{ColumnRole::kProduct, Wanted::kNothing};
    default:
      return std::nullopt;
  }
}

// −1, 0, 1 as i is below, equal to, or above d; exact. d is no NaN.
int Compare(std::int64_t i, double d) {
  constexpr double kBeyond = 0x1p63;
  if (d >= kBeyond) return -1;
  if (d < -kBeyond) return 1;
  const auto whole = static_cast<std::int64_t>(d);
  if (i != whole) return i < whole ? -1 : 1;
  const double rest = d - static_cast<double>(whole);
  return rest == 0 ? 0 : rest > 0 ? -1 : 1;
}

// How many of the hashes occur more than once. They are looked up in parts by their highest bits,
// so that a part's table stays in the processor's cache: half the time for a million rows.
std::int64_t RepeatedHashes(const std::vector<std::uint64_t>& hashes) {
  constexpr std::size_t kPartRows = 1 << 14;
  constexpr std::uint64_t kSeenAgain = 1;  // the lowest bit of a slot; a free slot is 0
  const int bits = std::bit_width(hashes.size() / kPartRows);
  const auto part_of = [&](std::uint64_t hash) {
    return static_cast<std::size_t>(bits == 0 ? 0 : hash >> (64 - bits));
  };
  std::vector<std::size_t> ends((std::size_t{1} << bits) + 1);
  for (const std::uint64_t hash : hashes) ++ends[part_of(hash) + 1];
  const std::size_t largest = *std::max_element(ends.begin(), ends.end());
  std::partial_sum(ends.begin(), ends.end(), ends.begin());
  std::vector<std::uint64_t> parted(hashes.size());
  for (const std::uint64_t hash : hashes) parted[ends[part_of(hash)]++] = hash;

  std::vector<std::uint64_t> slots(std::bit_ceil(2 * largest + 1));
  std::int64_t repeated = 0;
  std::size_t next = 0;
  for (std::size_t part = 0; part + 1 < ends.size(); ++part) {
    std::fill(slots.begin(), slots.end(), 0);
    for (; next < ends[part]; ++next) {
      const std::uint64_t hash = std::max<std::uint64_t>(parted[next] & ~kSeenAgain, 2);
      std::size_t slot = (hash >> 1) & (slots.size() - 1);
      while (slots[slot] != 0 && (slots[slot] & ~kSeenAgain) != hash)
        slot = (slot + 1) & (slots.size() - 1);
      if (slots[slot] == hash) ++repeated;
      slots[slot] = slots[slot] == 0 ? hash : hash | kSeenAgain;
    }
  }
  return repeated;
}

// Calls f with the text of a cluster's cell, as the host writes it.
template <class F>
auto WithText(const Cell& cell, F f) {
  if (cell.kind != Cell::Kind::kInteger) return f(cell.text);
  char text[24];
  const char* end = std::to_chars(text, text + sizeof text, cell.integer).ptr;
  return f(std::string_view(text, end));
}

}  // namespace

void KeyStore::Push(const Cell& cell) {
  std::uint64_t payload = 0;
  if (cell.kind == Cell::Kind::kInteger) payload = static_cast<std::uint64_t>(cell.integer);
  if (cell.kind == Cell::Kind::kNumber) payload = std::bit_cast<std::uint64_t>(cell.number);
  if (cell.kind == Cell::Kind::kText) {
    payload = base_ + text_.size();
    const std::uint64_t length = cell.text.size();
    text_.append(reinterpret_cast<const char*>(&length), sizeof length);
    text_.append(cell.text);
  }
  payload_.Push(payload);
  kinds_.Push(cell.kind);
}

void KeyStore::PopFront() {
  if (kinds_[0] == Cell::Kind::kText) {
    // Released texts go once they are half of all: a text is then moved once on average.
    constexpr std::uint64_t kWorthMoving = 4096;
    const std::string_view text = TextAt(0);
    const auto released = static_cast<std::uint64_t>(text.data() + text.size() - text_.data());
    if (released >= kWorthMoving && 2 * released > text_.size()) {
      text_.erase(0, released);
      base_ += released;
    }
  }
  payload_.PopFront();
  kinds_.PopFront();
}

KeyValue KeyStore::At(std::size_t row) const {
  const std::uint64_t payload = payload_[row];
  switch (kinds_[row]) {
    case Cell::Kind::kInteger:
      return static_cast<std::int64_t>(payload);
    case Cell::Kind::kNumber:
      return std::bit_cast<double>(payload);
    case Cell::Kind::kText:
      return std::string(TextAt(row));
    default:
      return {};
  }
}

std::uint64_t KeyStore::Hash(std::size_t row) const {
  switch (kinds_[row]) {
    case Cell::Kind::kInteger:
      return Mix(payload_[row] + 2);
    case Cell::Kind::kNumber:
      return HashNumber(std::bit_cast<double>(payload_[row]));
    case Cell::Kind::kText:
      return HashBytes(TextAt(row));
    default:
      return 3;
  }
}

std::string_view KeyStore::TextAt(std::size_t row) const {
  const char* place = text_.data() + (payload_[row] - base_);
  std::uint64_t length = 0;
  std::memcpy(&length, place, sizeof length);
  return {place + sizeof length, length};
}

bool KeyStore::Before(std::size_t a, std::size_t b) const {
  const Cell::Kind kind_a = kinds_[a], kind_b = kinds_[b];
  if (kind_a == Cell::Kind::kText || kind_b == Cell::Kind::kText) {
    if (kind_a != kind_b) return kind_b == Cell::Kind::kText;
    return TextAt(a) < TextAt(b);
  }
  const auto integer = [&](std::size_t row) { return static_cast<std::int64_t>(payload_[row]); };
  const auto number = [&](std::size_t row) { return std::bit_cast<double>(payload_[row]); };
  if (kind_a == Cell::Kind::kInteger) {
    return kind_b == Cell::Kind::kInteger ? integer(a) < integer(b)
                                          : Compare(integer(a), number(b)) < 0;
  }
  return kind_b == Cell::Kind::kInteger ? Compare(integer(b), number(a)) > 0
                                        : number(a) < number(b);
}

Result<ColumnSet> ColumnSet::Make(std::vector<Label> labels) {
  ColumnSet set;
  if (labels.empty()) return Error{"needs a response: a label and a value"};
  for (size_t i = 0; i < labels.size(); ++i) {
    Label& label = labels[i];
    const std::string quoted = "label '" + label.name + "'";
    for (const Column& earlier : set.columns_) {
      if (earlier.label.name == label.name) return Error{quoted + " is given twice"};
    }
    const std::optional<Plan> plan = PlanOf(label.word);
    if (!plan) return Error{quoted + " has a role that is not supported yet"};
    Column column;
    column.role = plan->role;
    column.declared = label.word != Label::Word::kNone;
    Gate gate = {plan->wanted, Domain::kEvery};
    const TransformKind kind = label.transform.kind();
    if (kind == TransformKind::kDateDays) {
      gate.wanted = Wanted::kDate;
    } else if (kind != TransformKind::kIdentity) {
      gate.domain = i == 0 ? Domain::kReturning : Domain::kTransform;
    }
    if (label.estimated == TransformKind::kBoxCox || column.role == ColumnRole::kWeight)
      gate.domain = Domain::kPositive;
    if (i == 0) {
      const bool number = label.word == Label::Word::kNone || label.word == Label::Word::kNumber ||
                          label.word == Label::Word::kTransform;
      if (!number)
        return Error{quoted +
                     " comes first, so it is the response, which must be a number or a "
                     "re-expression of one"};
      column.role = ColumnRole::kResponse;
      if (gate.wanted == Wanted::kUndecided) gate.wanted = Wanted::kNumber;
    }
    for (const auto& [role, index, what] :
         {std::tuple{ColumnRole::kWeight, &set.weight_, "weight"},
          std::tuple{ColumnRole::kCluster, &set.cluster_, "cluster"},
          std::tuple{ColumnRole::kKey, &set.key_, "key"},
          std::tuple{ColumnRole::kOrder, &set.order_, "order"}}) {
      if (column.role != role) continue;
      if (*index >= 0) return Error{quoted + " is a second " + what + "; a model has one"};
      *index = static_cast<int>(i);
    }
    column.label = std::move(label);
    set.columns_.push_back(std::move(column));
    set.gates_.push_back(gate);
  }
  if (std::optional<Error> error = set.FindParts()) return *error;
  return set;
}

std::optional<Error> ColumnSet::FindParts() {
  for (size_t i = 0; i < columns_.size(); ++i) {
    Column& product = columns_[i];
    if (product.role != ColumnRole::kProduct) continue;
    const std::string quoted = "label '" + product.label.name + "' is a product";
    const std::array<const std::string*, 2> names = {&product.label.part_a, &product.label.part_b};
    for (size_t part = 0; part < 2; ++part) {
      std::string known;
      for (size_t c = 0; c < columns_.size(); ++c) {
        const Column& column = columns_[c];
        if (column.role != ColumnRole::kPredictor) continue;
        known += (known.empty() ? "" : ", ") + column.label.name;
        if (column.label.name != *names[part]) continue;
        product.parts[part] = static_cast<int>(c);
      }
      if (product.parts[part] < 0) {
        return Error{quoted + " of '" + *names[part] + "', which is no predictor of the model; " +
                     (known.empty() ? std::string("it has none") : "they are " + known)};
      }
    }
    if (product.parts[0] == product.parts[1]) {
      return Error{quoted + " of '" + *names[0] + "' by itself; for a square write '" +
                   QuotedName(*names[0]) + " | polynomial 2'"};
    }
    const auto pair = std::minmax(product.parts[0], product.parts[1]);
    for (size_t earlier = 0; earlier < i; ++earlier) {
      const std::array<int, 2>& parts = columns_[earlier].parts;
      if (columns_[earlier].role == ColumnRole::kProduct &&
          std::minmax(parts[0], parts[1]) == pair) {
        return Error{quoted + " that repeats '" + columns_[earlier].label.name + "'"};
      }
    }
  }
  return std::nullopt;
}

bool ColumnSet::Passes(std::size_t i, double number) const {
  switch (gates_[i].domain) {
    case Domain::kEvery:
      return true;
    case Domain::kPositive:
      return number > 0;
    case Domain::kTransform:
      return columns_[i].label.transform.InDomain(number);
    case Domain::kReturning:
      return columns_[i].label.transform.Returns(number);
  }
  return false;
}

ColumnSet::Standing ColumnSet::Judge(std::span<const Cell> cells, int direction) {
  Standing standing;
  const Gate* gates = gates_.data();
  for (size_t i = 0, n = cells.size(); i < n; ++i) {
    const Cell& cell = cells[i];
    if (cell.kind >= Cell::Kind::kNumber && gates[i].domain == Domain::kEvery &&
        !cell.number_from_text) [[likely]]
      continue;
    const bool missing = cell.kind == Cell::Kind::kMissing && gates_[i].wanted != Wanted::kKey;
    const bool outside = cell.kind == Cell::Kind::kOutside ||
                         (cell.kind == Cell::Kind::kNumber && !Passes(i, cell.number));
    if (missing) columns_[i].missing += direction;
    if (outside) columns_[i].outside += direction;
    if (cell.number_from_text && !outside) columns_[i].numbers_from_text += direction;
    standing.gap |= missing;
    standing.outside |= outside;
  }
  rows_.offered += direction;
  rows_.with_gaps += standing.gap ? direction : 0;
  rows_.outside += standing.outside ? direction : 0;
  rows_.fitted += standing.kept() ? direction : 0;
  return standing;
}

std::optional<Error> ColumnSet::Add(std::span<const Cell> cells) {
  assert(cells.size() == columns_.size());
  ++seen_;
  if (weight_ >= 0) {
    const Cell& cell = cells[static_cast<size_t>(weight_)];
    if (cell.kind == Cell::Kind::kNumber && cell.number < 0) {
      return Error{columns_[static_cast<size_t>(weight_)].label.name +
                   " must not be negative, got " + NumberText(cell.number) + " (row " +
                   std::to_string(seen_) + ")"};
    }
  }
  if (!Judge(cells, 1).kept()) {
    dropped_.push_back(seen_);
    MoveLeftOut(cells, 1);
    return std::nullopt;
  }
  return Keep(cells);
}

std::optional<Error> ColumnSet::AddPlain(std::span<const Cell> cells) {
  assert(cells.size() == columns_.size());
  ++seen_;
  ++rows_.offered;
  ++rows_.fitted;
  return Keep(cells);
}

std::optional<Error> ColumnSet::Keep(std::span<const Cell> cells) {
  if (overfull_) return std::nullopt;
  const Gate* gates = gates_.data();
  Column* columns = columns_.data();
  for (size_t i = 0, n = cells.size(); i < n; ++i) {
    if (gates[i].wanted == Wanted::kNumber) [[likely]] {
      columns[i].numbers.Push(cells[i].number);
    } else if (std::optional<Error> error = Keep(i, cells[i])) {
      return error;
    }
  }
  return std::nullopt;
}

std::optional<Error> ColumnSet::Keep(std::size_t i, const Cell& cell) {
  Column& column = columns_[i];
  switch (gates_[i].wanted) {
    case Wanted::kNumber:
    case Wanted::kDate:
      column.numbers.Push(cell.number);
      break;
    case Wanted::kText: {
      const std::optional<std::uint16_t> code = column.levels.Enter(cell.text);
      if (code && column.levels.rows(*code) == 1 && !IsUtf8(cell.text)) {
        return Error{column.label.name + " must be UTF-8 text, got text '" +
                     Excerpt(cell.text, 60) + "' (row " + std::to_string(seen_) + ")"};
      }
      if (code) {
        column.codes.Push(*code);
      } else {
        overfull_ = true;
      }
      break;
    }
    case Wanted::kKey:
      keys_.Push(cell);
      break;
    case Wanted::kCluster:
      groups_.Push(
          *WithText(cell, [&](std::string_view text) { return group_table_.Enter(text); }));
      break;
    case Wanted::kOrder:
      order_keys_.Push(cell);
      break;
    case Wanted::kPresence:
    case Wanted::kNothing:
    case Wanted::kUndecided:  // never kept: an undecided column has only missing values
      break;
  }
  return std::nullopt;
}

void ColumnSet::Remove(std::span<const Cell> cells) {
  ++removed_;
  if (!Judge(cells, -1).kept()) {
    dropped_.pop_front();
    MoveLeftOut(cells, -1);
    return;
  }
  if (overfull_) return;
  for (size_t i = 0; i < columns_.size(); ++i) {
    Column& column = columns_[i];
    switch (gates_[i].wanted) {
      case Wanted::kNumber:
      case Wanted::kDate:
        column.numbers.PopFront();
        break;
      case Wanted::kText:
        column.levels.Leave(column.codes[0]);
        column.codes.PopFront();
        break;
      case Wanted::kKey:
        keys_.PopFront();
        break;
      case Wanted::kCluster:
        group_table_.Leave(groups_[0]);
        groups_.PopFront();
        break;
      case Wanted::kOrder:
        order_keys_.PopFront();
        break;
      default:
        break;
    }
  }
}

void ColumnSet::MoveLeftOut(std::span<const Cell> cells, int direction) {
  if (!left_out_wanted_) return;
  for (size_t i = 0; i < cells.size(); ++i) {
    Column& column = columns_[i];
    const bool speaks =
        column.role == ColumnRole::kResponse || column.role == ColumnRole::kPredictor;
    if (!speaks || cells[i].kind != Cell::Kind::kNumber) continue;
    if (direction > 0) {
      column.left_out.Add(cells[i].number);
    } else {
      column.left_out.Remove(cells[i].number);
    }
  }
}

NumbersLeftOut ColumnSet::LeftOut(std::size_t i) const {
  const CentralSums sums = columns_[i].left_out.Summarise();
  return {.rows = sums.n, .mean = Mean(sums)};
}

std::string ColumnSet::refusal() const {
  for (const Column& column : columns_) {
    if (column.levels.size() > kMostLevels) {
      return column.label.name + " has more than " + std::to_string(kMostLevels) +
             " levels; is it a key, or a number?";
    }
  }
  return "";
}

// The sum over rows of a hash of the row is the same in every order.
std::string ColumnSet::Digest() const {
  const Blocked<double>& responses = columns_[0].numbers;
  const Blocked<double>* weights =
      weight_ < 0 ? nullptr : &columns_[static_cast<size_t>(weight_)].numbers;
  std::array<unsigned long long, 2> sums = {0, 0};
  std::size_t row = 0;
  for (std::size_t b = 0; b < responses.blocks(); ++b) {
    for (const double response : responses.block(b)) {
      std::uint64_t hash = HashNumber(response);
      if (key_ >= 0) hash = Mix(hash + keys_.Hash(row));
      if (weights != nullptr) hash = ~Mix(hash + HashNumber((*weights)[row]));
      sums[0] += hash;
      sums[1] += Mix(hash ^ 0xD1B54A32D192ED03ULL);
      ++row;
    }
  }
  char text[33];
  std::snprintf(text, sizeof text, "%016llx%016llx", sums[0], sums[1]);
  return text;
}

std::int64_t ColumnSet::RepeatedKeys() const {
  std::vector<std::uint64_t> hashes;
  hashes.reserve(keys_.size());
  for (std::size_t row = 0; row < keys_.size(); ++row)
    if (!keys_.IsMissing(row)) hashes.push_back(keys_.Hash(row));
  return RepeatedHashes(hashes);
}

std::int64_t ColumnSet::OfferedNumber(std::size_t i) const {
  // Row number N is kept row N − removed − 1 − (dropped rows before it).
  const auto index = static_cast<std::int64_t>(i);
  size_t low = 0, high = dropped_.size();
  while (low < high) {
    const size_t mid = (low + high) / 2;
    if (dropped_[mid] - removed_ - 1 - static_cast<std::int64_t>(mid) <= index) {
      low = mid + 1;
    } else {
      high = mid;
    }
  }
  return index + 1 + static_cast<std::int64_t>(low);
}

std::vector<std::ptrdiff_t> ColumnSet::Order() const {
  std::vector<std::ptrdiff_t> order;
  if (order_ < 0) return order;
  order.resize(static_cast<std::size_t>(rows_.fitted));
  std::iota(order.begin(), order.end(), 0);
  const auto before = [&](std::ptrdiff_t a, std::ptrdiff_t b) {
    return order_keys_.Before(static_cast<std::size_t>(a), static_cast<std::size_t>(b));
  };
  if (std::is_sorted(order.begin(), order.end(), before)) return {};
  std::stable_sort(order.begin(), order.end(), before);
  return order;
}

}  // namespace ladderline
