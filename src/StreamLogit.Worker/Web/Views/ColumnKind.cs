namespace StreamLogit.Worker.Web.Views;

/// <summary>What the cells of a column are, which decides how the page writes them.</summary>
internal enum ColumnKind
{
    /// <summary>Text.</summary>
    Text,

    /// <summary>A time, RFC 3339.</summary>
    Time,

    /// <summary>A whole number.</summary>
    Count,

    /// <summary>A number of labels, which weights make fractional.</summary>
    Amount,

    /// <summary>A share, 0 to 1.</summary>
    Share,

    /// <summary>A loss, an index or a coefficient.</summary>
    Figure,

    /// <summary>Seconds.</summary>
    Seconds,
}
