//! Field calculations: weighing error, cylinder limits, and the like.
