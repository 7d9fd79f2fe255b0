namespace StreamLogit.Worker.Web.Views;

/// <summary>How what came compares with what was promised.</summary>
internal enum Standing
{
    /// <summary>Too little is known.</summary>
    Unknown,

    /// <summary>Within the 80 % range.</summary>
    Holds,

    /// <summary>Beyond the 80 % range but within that of 95 %.</summary>
    Doubtful,

    /// <summary>Beyond the 95 % range, or scores worse than the base rate's.</summary>
    Broken,
}
