namespace StreamLogit.Engine.Definition;

/// <summary>How the value of a number becomes a feature value.</summary>
public enum NumberScale
{
    /// <summary>As it is.</summary>
    None,

    /// <summary>sign(x) ln(1 + |x|).</summary>
    Log1p,

    /// <summary>(x - mean) / standard deviation, both over the events seen before this one.</summary>
    Standard,

    /// <summary><see cref="Standard"/> of <see cref="Log1p"/>.</summary>
    StandardLog1p,

    /// <summary>
    /// 2 q - 1, where q is the share of the values before this one that are smaller, equal ones counted half: -1 for the smallest, 1 for the largest.
    /// The share is off by at most 0.02 in 99 of 100 cases.
    /// </summary>
    Rank,

    /// <summary>ln(p / (1 - p)) less that of the overall rate: for rates only.</summary>
    LogOdds,
}
