namespace StreamLogit.Pipeline.Files;

/// <summary>Where a cell's text stands in its row, without the quotes around it.</summary>
/// <param name="Start">Its first byte.</param>
/// <param name="Length">Its length in bytes.</param>
/// <param name="HasDoubledQuotes">Whether a quote within is written as two.</param>
internal readonly record struct CsvCell(int Start, int Length, bool HasDoubledQuotes);
