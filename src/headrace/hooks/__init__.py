"""The five hooks through which every drain, refill, check and report enters, built-in or a stranger's."""
