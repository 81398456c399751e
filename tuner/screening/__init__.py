"""What must not be made, and what needs a caution?"""
