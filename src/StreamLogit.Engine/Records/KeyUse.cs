namespace StreamLogit.Engine.Records;

/// <summary>How the value of a key is read. The usual ways are told apart so that they need not go the general one.</summary>
internal enum KeyUse
{
    /// <summary>Not at all.</summary>
    Unread,

    /// <summary>As one number, for nothing else.</summary>
    Number,

    /// <summary>As one category, for nothing else.</summary>
    Category,

    /// <summary>As the id, for nothing else.</summary>
    Id,

    /// <summary>As the time, for nothing else.</summary>
    Time,

    /// <summary>In another way, or in several, or by its inner keys.</summary>
    General,
}
