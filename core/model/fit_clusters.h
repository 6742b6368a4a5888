// The clusters of a fit: numbering them, and what they say about its terms.
#ifndef LADDERLINE_CORE_MODEL_FIT_CLUSTERS_H_
#define LADDERLINE_CORE_MODEL_FIT_CLUSTERS_H_

#include <cstdint>
#include <vector>

#include "core/model/columns.h"
#include "core/model/model.h"

namespace ladderline {

struct NumberedClusters {
  std::vector<std::uint32_t> of_row;  // from 0, without gaps, in the order of their first rows
  std::int64_t count = 0;
};

// Nothing without a cluster column. 4 bytes per row.
NumberedClusters NumberClusters(const ColumnSet& set);

// Notes on terms: a level of a category that is found in one cluster alone is as if it were known
// without the differences between clusters, so that its cluster error comes out too small. The
// terms have their other notes already.
void NoteLevelsOfOneCluster(const ColumnSet& set, const NumberedClusters& clusters, Model& model);

}  // namespace ladderline

#endif  // LADDERLINE_CORE_MODEL_FIT_CLUSTERS_H_
