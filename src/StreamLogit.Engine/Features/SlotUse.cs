namespace StreamLogit.Engine.Features;

/// <summary>What a category value found at its hashed slot.</summary>
internal enum SlotUse
{
    /// <summary>A slot that no value had used; it is this value's now.</summary>
    First,

    /// <summary>Its own slot.</summary>
    Again,

    /// <summary>The slot of another value, with which it shares a coefficient.</summary>
    Collision,
}
