namespace StreamLogit.Worker.Web.Views;

/// <summary>A column of a table.</summary>
/// <param name="Key">Its name in JSON and CSV.</param>
/// <param name="Title">Its heading on the page.</param>
/// <param name="Kind">What its cells are.</param>
internal sealed record DataColumn(string Key, string Title, ColumnKind Kind);
