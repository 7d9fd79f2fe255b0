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
}
